autocmd BufNewFile,BufRead *.plight setfiletype portlight
