;;; scruple.el --- Recipes of laboratory solutions, with their language server -*- lexical-binding: t; -*-

;; Setup is described in README.md beside this file.

;;; Code:

(require 'eglot)

(defgroup scruple nil
  "Recipes of laboratory solutions."
  :group 'languages)

(defcustom scruple-command '("scruple" "serve")
  "The program and its arguments."
  :type '(repeat string))

(defvar scruple-mode-syntax-table
  (let ((table (make-syntax-table)))
    (modify-syntax-entry ?# "<" table)
    (modify-syntax-entry ?\n ">" table)
    (modify-syntax-entry ?\" "\"" table)
    table)
  "Comments run from a number sign to the end of the line.")

(defvar scruple-font-lock-keywords
  `((,(concat "^" (regexp-opt '("use" "language" "solution" "bottle" "substance" "ion" "solid" "danger" "group" "lab") 'words))
     . font-lock-keyword-face)
    (,(concat "^\\s-+" (regexp-opt '("q.s." "made at" "used at" "expect" "accept" "like" "without" "concentrate"
                                     "before use" "after autoclaving" "stored at" "stored below" "ready after"
                                     "use within" "step" "record" "note" "document" "makes" "in" "all" "or")))
     . font-lock-builtin-face)
    ("\\_<[0-9]+\\(?:\\.[0-9]+\\)?\\_>" . font-lock-constant-face))
  "Colours until the server has answered, and for Emacs versions that do not ask it for colours.")

;;;###autoload
(define-derived-mode scruple-mode prog-mode "Recipe"
  "Mode for recipes of laboratory solutions."
  (setq-local comment-start "# ")
  (setq-local comment-start-skip "#+\\s-*")
  (setq-local font-lock-defaults '(scruple-font-lock-keywords nil t)))

;;;###autoload
(add-to-list 'auto-mode-alist '("\\.prep\\'" . scruple-mode))

(add-to-list 'eglot-server-programs (cons 'scruple-mode (lambda (&rest _) scruple-command)))

(provide 'scruple)
;;; scruple.el ends here
