# scruple in Kakoune: the file type of recipes, and the language server by way of kakoune-lsp.

hook global BufCreate .*\.prep %{
    set-option buffer filetype scruple
}

hook global WinSetOption filetype=scruple %{
    set-option window comment_line '#'
    lsp-enable-window
    lsp-inlay-hints-enable window
}

hook global BufSetOption filetype=scruple %{
    set-option buffer lsp_servers %{
        [scruple]
        root_globs = ["scruple.toml", ".git", ".hg"]
        command = "scruple"
        args = ["serve"]
    }
}
