call ale#Set('bayes_wellposed_executable', 'wellposed')

function! WellposedRoot(buffer) abort
  return fnamemodify(bufname(a:buffer), ':p:h')
endfunction

call ale#linter#Define('bayes', {
\   'name': 'wellposed',
\   'lsp': 'stdio',
\   'executable': {b -> ale#Var(b, 'bayes_wellposed_executable')},
\   'command': '%e serve',
\   'language': 'bayes',
\   'project_root': function('WellposedRoot'),
\})
