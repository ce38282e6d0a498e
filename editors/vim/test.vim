" Driven by test.sh in the real editor: quickfix, then findings and a fix through ALE.
set nocompatible noswapfile hidden
filetype plugin on
let s:out = []
function! s:Say(text) abort
  call add(s:out, a:text)
endfunction
function! s:End(failed) abort
  call s:Say(a:failed ? 'FAIL' : 'PASS')
  call writefile(s:out, $RESULT)
  if a:failed | cquit! | else | qall! | endif
endfunction
function! s:Wait(condition) abort
  let l:start = reltime()
  while reltimefloat(reltime(l:start)) < 20
    if eval(a:condition) | return 1 | endif
    sleep 20m
  endwhile
  return 0
endfunction
let g:ale_linters_explicit = 1
let g:ale_linters = {'bayes': ['wellposed']}
let g:ale_lint_on_text_changed = 'never'
let g:ale_lint_on_enter = 0
let g:ale_lint_on_filetype_changed = 0
execute 'edit ' . $MODEL
if &filetype !=# 'bayes' | call s:Say('filetype is ' . &filetype) | call s:End(1) | endif
silent make!
let s:found = filter(getqflist(), 'v:val.valid && v:val.text =~# "posterior-does-not-exist"')
if len(s:found) != 1 || s:found[0].lnum != 5 | call s:Say('quickfix: ' . string(getqflist())) | call s:End(1) | endif
call s:Say('ok   quickfix: ' . s:found[0].text)
call ale#Queue(0, '')
if !s:Wait('!empty(filter(copy(ale#engine#GetLoclist(bufnr(""))), "get(v:val, \"code\", \"\") ==# \"posterior-does-not-exist\""))')
  call s:Say('no finding through ALE: ' . string(ale#engine#GetLoclist(bufnr('')))) | call s:End(1)
endif
call s:Say('ok   finding')
call cursor(5, 9)
call feedkeys("2\<CR>", 't')
ALECodeAction
if !s:Wait('getline(5) =~# "Beta(1"') | call s:Say('no fix: ' . getline(5)) | call s:End(1) | endif
call s:Say('ok   fix: ' . getline(5))
call s:End(0)
