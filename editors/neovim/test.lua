-- Driven by test.sh in the real editor: a finding, a hover, a completion and an applied fix.
vim.opt.swapfile = false
local function say(...) io.stdout:write(table.concat(vim.tbl_map(tostring, { ... }), ' ') .. '\n') end
local ok, problem = xpcall(function()
  vim.cmd('edit ' .. os.getenv('MODEL'))
  local buffer = vim.api.nvim_get_current_buf()
  assert(vim.bo[buffer].filetype == 'bayes', 'filetype is ' .. vim.bo[buffer].filetype)
  local function finding()
    for _, d in ipairs(vim.diagnostic.get(buffer)) do
      local code = d.code or (d.user_data and d.user_data.lsp and d.user_data.lsp.code)
      if code == 'posterior-does-not-exist' then return d end
    end
  end
  assert(vim.wait(20000, finding, 20), 'no finding')
  local d = finding()
  assert(d.lnum == 4 and d.message:find('p = 0', 1, true), 'finding: ' .. vim.inspect(d))
  say('ok   finding: ' .. d.message:match('[^\n]+'))
  local document = { uri = vim.uri_from_bufnr(buffer) }
  local function ask(method, params)
    for _, answer in pairs(vim.lsp.buf_request_sync(buffer, method, params, 20000) or {}) do
      assert(not answer.err, method .. ': ' .. vim.inspect(answer.err))
      if answer.result then return answer.result end
    end
  end
  local hover = ask('textDocument/hover', { textDocument = document, position = { line = d.lnum, character = d.col } })
  assert(hover and hover.contents.value:find('No posterior'), 'hover: ' .. vim.inspect(hover))
  say('ok   hover')
  local last = vim.api.nvim_buf_line_count(buffer)
  vim.api.nvim_buf_set_lines(buffer, last, last, false, { 'unk' })
  vim.wait(300)
  local items = ask('textDocument/completion', { textDocument = document, position = { line = last, character = 3 } })
  items = items and (items.items or items) or {}
  local found = false
  for _, item in ipairs(items) do found = found or item.label:find('^unknown') ~= nil end
  assert(found, 'no completion of unknown: ' .. #items .. ' items')
  say('ok   completion')
  vim.api.nvim_buf_set_lines(buffer, last, last + 1, false, {})
  assert(vim.wait(20000, finding, 20), 'the finding did not come back')
  local chosen
  vim.ui.select = function(list, options, done)
    for i, item in ipairs(list) do
      local text = options.format_item and options.format_item(item) or tostring(item)
      if text:find('Beta(1/2, 1/2)', 1, true) then
        chosen = text
        return done(item, i)
      end
    end
    done(nil)
  end
  vim.api.nvim_win_set_cursor(0, { d.lnum + 1, d.col })
  vim.lsp.buf.code_action()
  local function fixed() return vim.api.nvim_buf_get_lines(buffer, 4, 5, false)[1]:find('Beta(1/2, 1/2)', 1, true) end
  assert(vim.wait(20000, fixed, 20), 'no fix applied; chosen: ' .. tostring(chosen))
  assert(vim.wait(20000, function() return not finding() end, 20), 'the finding stayed')
  say('ok   fix: ' .. chosen)
end, debug.traceback)
say(ok and 'PASS' or 'FAIL ' .. problem)
vim.cmd(ok and 'qall!' or 'cquit 1')
