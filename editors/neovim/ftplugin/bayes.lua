vim.bo.commentstring = '# %s'

local command = vim.g.wellposed_command
if command == nil then
  command = { 'wellposed', 'serve' }
end
if command and vim.fn.executable(command[1]) == 1 then
  local buffer = vim.api.nvim_get_current_buf()
  local folder = vim.fn.fnamemodify(vim.api.nvim_buf_get_name(buffer), ':p:h')
  local config = { name = 'wellposed', cmd = command, root_dir = folder }
  if vim.lsp.start then -- 0.8 and later: one server for a folder
    vim.lsp.start(config)
  else
    local id = vim.lsp.start_client(config)
    if id then
      vim.lsp.buf_attach_client(buffer, id)
    end
  end
end
