if exists('current_compiler')
  finish
endif
let current_compiler = 'wellposed'
CompilerSet makeprg=wellposed\ lint\ --format\ line\ %:S
CompilerSet errorformat=%f:%l:%c:\ %*[^:]:\ %m
