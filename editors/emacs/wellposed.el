;;; wellposed.el --- Edit and check Bayesian model files -*- lexical-binding: t; -*-

;; SPDX-License-Identifier: Apache-2.0
;; Version: 0.1.0
;; Package-Requires: ((emacs "28.1") (eglot "1.9"))

;;; Commentary:

;; A major mode for *.bayes files and the connection of eglot to
;; `wellposed serve'.

;;; Code:


(defgroup wellposed nil
  "Check Bayesian model files."
  :group 'languages)

(defcustom wellposed-command '("wellposed" "serve")
  "Program and arguments that start the language server."
  :type '(repeat string)
  :group 'wellposed)

(defvar wellposed-mode-syntax-table
  (let ((table (make-syntax-table)))
    (modify-syntax-entry ?# "<" table)
    (modify-syntax-entry ?\n ">" table)
    (modify-syntax-entry ?\" "\"" table)
    (modify-syntax-entry ?_ "_" table)
    table)
  "Syntax table of `wellposed-mode'.")

(load (expand-file-name "wellposed-words" (file-name-directory (or load-file-name buffer-file-name))) t t)

(defvar wellposed-font-lock-keywords
  (list (cons (concat "^[ \t]*" (regexp-opt (bound-and-true-p wellposed-keywords) 'symbols)) 'font-lock-keyword-face)
        (cons (regexp-opt (bound-and-true-p wellposed-kinds) 'symbols) 'font-lock-type-face)
        (cons (regexp-opt (bound-and-true-p wellposed-distributions) 'symbols) 'font-lock-function-name-face)
        (cons (concat (regexp-opt (bound-and-true-p wellposed-functions) 'symbols) "[ \t]*(") '(1 font-lock-builtin-face)))
  "Highlighting of `wellposed-mode'; the words come from wellposed-words.el.")

;;;###autoload
(define-derived-mode wellposed-mode prog-mode "Bayes"
  "Major mode for Bayesian model files."
  (setq-local comment-start "# "
              comment-start-skip "#+[ \t]*"
              font-lock-defaults '(wellposed-font-lock-keywords)))

;;;###autoload
(add-to-list 'auto-mode-alist '("\\.bayes\\'" . wellposed-mode))

(with-eval-after-load 'eglot
  (add-to-list 'eglot-server-programs
               (cons 'wellposed-mode (lambda (&rest _) wellposed-command))))

(provide 'wellposed)
;;; wellposed.el ends here
