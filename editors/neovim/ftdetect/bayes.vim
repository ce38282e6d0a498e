autocmd BufNewFile,BufRead *.bayes setfiletype bayes
