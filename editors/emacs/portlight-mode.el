;;; portlight-mode.el --- Portlight networks -*- lexical-binding: t; -*-

;; A major mode for .plight files, and the server for eglot.

;;; Code:

(defvar portlight-mode-syntax-table
  (let ((table (make-syntax-table)))
    (modify-syntax-entry ?# "<" table)
    (modify-syntax-entry ?\n ">" table)
    (modify-syntax-entry ?\" "\"" table)
    (modify-syntax-entry ?_ "w" table)
    table)
  "Syntax table of `portlight-mode'.")

(defconst portlight-font-lock-keywords
  `((,(concat "^[ \t]*\\(" (regexp-opt '("ground" "let" "port" "function" "tell" "require" "start"
                                         "prefer" "allow" "use" "subnetwork" "part"))
              "\\)\\_>")
     1 font-lock-keyword-face)
    (,(concat "\\_<\\(" (regexp-opt '("resistor" "inductor" "capacitor" "impedance" "admittance"
                                      "voltage source" "current source" "op amp" "transformer"
                                      "coupling" "switch" "wire"))
              "\\)[ \t]+\\([[:alpha:]_][[:alnum:]_]*\\)")
     (1 font-lock-type-face) (2 font-lock-variable-name-face))
    ("\\_<\\([vizyp]\\|thevenin\\|norton\\)\\[" 1 font-lock-builtin-face)
    ("\\_<\\([[:alpha:]_][[:alnum:]_]*\\)(" 1 font-lock-function-name-face))
  "Colours of `portlight-mode'.")

;;;###autoload
(define-derived-mode portlight-mode prog-mode "Portlight"
  "Major mode for Portlight networks."
  (setq-local comment-start "# ")
  (setq-local comment-start-skip "#+[ \t]*")
  (setq-local font-lock-defaults '(portlight-font-lock-keywords)))

;;;###autoload
(add-to-list 'auto-mode-alist '("\\.plight\\'" . portlight-mode))

(defvar eglot-server-programs)
(with-eval-after-load 'eglot
  (add-to-list 'eglot-server-programs '(portlight-mode . ("portlight" "serve"))))

(provide 'portlight-mode)
;;; portlight-mode.el ends here
