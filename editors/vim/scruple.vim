" scruple in Vim: the file type of recipes, and the language server by way of ALE. Setup is described in README.md beside this
" file.

augroup scruple
  autocmd!
  autocmd BufRead,BufNewFile *.prep setfiletype scruple
  autocmd FileType scruple setlocal commentstring=#\ %s comments=:# expandtab shiftwidth=4
augroup END

" The folder of the library of recipes: the one with scruple.toml, else the one under version control, else the file's own.
function! ScrupleRoot(buffer) abort
  let l:file = expand('#' . a:buffer . ':p:h')
  for l:marker in ['scruple.toml', '.git', '.hg', '.svn']
    let l:found = findfile(l:marker, l:file . ';')
    let l:found = l:found !=# '' ? l:found : finddir(l:marker, l:file . ';')
    if l:found !=# ''
      return fnamemodify(l:found, ':p:h' . (isdirectory(l:found) ? ':h' : ''))
    endif
  endfor
  return l:file
endfunction

call ale#linter#Define('scruple', {
\ 'name': 'scruple',
\ 'lsp': 'stdio',
\ 'executable': get(g:, 'scruple_command', 'scruple'),
\ 'command': '%e serve',
\ 'language': 'scruple',
\ 'project_root': function('ScrupleRoot'),
\})
