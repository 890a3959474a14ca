-- scruple in Neovim: the file type of recipes, and the language server. Setup is described in README.md beside this file.

local M = {}

local defaults = {
  -- The program and its arguments; add "--log", "FILE" to see what the server does.
  cmd = { "scruple", "serve" },
  -- Values beside the text, where Neovim can show them (0.10 and newer).
  inlay_hints = true,
  -- What the server shows; for example { inlayHints = { expectation = false } }.
  settings = {},
}

local function root_of(path)
  local markers = { "scruple.toml", ".git", ".hg", ".svn", ".jj" }
  local found = vim.fs.find(markers, { path = vim.fs.dirname(path), upward = true })[1]
  return found and vim.fs.dirname(found) or nil
end

local function attach(options, buffer)
  local path = vim.api.nvim_buf_get_name(buffer)
  vim.lsp.start({
    name = "scruple",
    cmd = options.cmd,
    root_dir = root_of(path),
    settings = { scruple = options.settings },
    init_options = options.settings,
    on_attach = function(client, attached)
      if options.inlay_hints and vim.lsp.inlay_hint and client.server_capabilities.inlayHintProvider then
        vim.lsp.inlay_hint.enable(true, { bufnr = attached })
      end
    end,
  }, {
    bufnr = buffer,
    -- One server serves every library of recipes, and the pages of the built-in library that it leads to.
    reuse_client = function(client)
      return client.name == "scruple"
    end,
  })
end

function M.setup(options)
  options = vim.tbl_deep_extend("force", defaults, options or {})
  vim.filetype.add({ extension = { prep = "scruple" } })
  vim.api.nvim_create_autocmd("FileType", {
    pattern = "scruple",
    group = vim.api.nvim_create_augroup("scruple", { clear = true }),
    callback = function(event)
      vim.bo[event.buf].commentstring = "# %s"
      attach(options, event.buf)
    end,
  })
end

return M
