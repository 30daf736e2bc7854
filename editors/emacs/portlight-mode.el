;;; portlight-mode.el --- Portlight networks -*- lexical-binding: t; -*-

;; A major mode for .plight files: colours, comments, and the server for eglot
;; and lsp-mode.  Works with Emacs 28 and later.

;;; Code:

(defgroup portlight nil
  "Portlight networks."
  :group 'languages)

(defcustom portlight-command "portlight"
  "The program that is started as `portlight serve'."
  :type 'string)

(defface portlight-node '((t nil))
  "A node in a path, or a name whose meaning only the server knows.")
(defface portlight-wire '((t :inherit font-lock-keyword-face :weight normal))
  "The boxes of a path and the bars between parallel parts.")
(defface portlight-number '((t :inherit font-lock-constant-face))
  "A number.")
(defface portlight-unit '((t :inherit font-lock-preprocessor-face))
  "A unit.")

(defvar portlight-mode-syntax-table
  (let ((table (make-syntax-table)))
    (modify-syntax-entry ?# "<" table)
    (modify-syntax-entry ?\n ">" table)
    (modify-syntax-entry ?\" "\"" table)
    (modify-syntax-entry ?_ "w" table)
    (modify-syntax-entry ?% "." table)
    (modify-syntax-entry ?+ "." table)
    (modify-syntax-entry ?− "." table)
    (dolist (mark '(?- ?* ?/ ?^ ?= ?< ?> ?| ?& ?$ ?° ?±))
      (modify-syntax-entry mark "." table))
    table)
  "Syntax table of `portlight-mode'.")

(defconst portlight--name "[[:alpha:]_][[:alpha:]0-9_]*")
(defconst portlight--node "[[:alpha:]0-9_]+")
(defconst portlight--opens "\\(?:^\\|\\[\\|||\\)[ \t]*"
  "What stands before a part that is declared.")
(defconst portlight--comma "\\(?:^\\|,\\)[ \t]*"
  "What stands before an option or a terminal.")
(defconst portlight--space "\\(?:[ \t]\\|$\\)")
(defconst portlight--kinds
  (concat "\\(?:resistor\\|inductor\\|capacitor\\|impedance\\|admittance\\|voltage[ \t]+source"
          "\\|current[ \t]+source\\|op[ \t]+amp\\|transformer\\|coupling\\|switch\\|wire\\)"))
(defconst portlight--factor
  (concat "\\(?:\\(?:da\\|[qryzafpnuµμmcdhkMGTPEZYRQ]\\)?\\(?:ohm\\|[ΩΩ]\\|Wb\\|Hz\\|rad\\|[VASHFWJCs]\\)"
          "\\|deg\\|°\\|%\\|ppm\\|dB\\(?:V\\|[uµμ]V\\|u\\)?\\)\\(?:\\^[-−]?[0-9]+\\)?"))
(defconst portlight--unit
  (concat " ?\\(\\(?:1/\\)?" portlight--factor "\\(?:[*/]" portlight--factor "\\)*\\)"
          "\\(?:[^[:alpha:]0-9_]\\|$\\)"))
(defconst portlight--number
  "\\(?:[0-9]+\\(?:\\.[0-9]+\\)?\\|\\.[0-9]+\\)\\(?:[eE][-+−]?[0-9]+\\)?")
(defconst portlight--code "[RrkKMGTLFpnuµμm][0-9]*\\(?:[^[:alpha:]0-9_]\\|$\\)"
  "What follows the first digits of a value in the code of IEC 60062.")

(defun portlight--found (last &rest parts)
  "A font-lock matcher for the regexp of PARTS that goes on behind group LAST.
What follows that group is context only, and may begin the next match."
  (let ((regexp (apply #'concat parts)))
    (lambda (limit)
      (when (let ((case-fold-search nil)) (re-search-forward regexp limit t))
        (goto-char (or (match-end last) (match-end 0)))
        t))))

(defun portlight--found-number (limit)
  "A font-lock matcher up to LIMIT: group 1 is a number, 2 its unit if any."
  (let ((case-fold-search nil) found)
    (while (and (not found) (re-search-forward portlight--number limit t))
      (let ((start (match-beginning 0)) (end (match-end 0)))
        (cond
         ((and (> start (point-min))
               (string-match-p "[[:alpha:]0-9_.]" (string (char-before start)))))
         ((looking-at portlight--unit)
          (goto-char (match-end 1))
          (setq found (list start (point) start end (match-beginning 1) (point))))
         ((looking-at portlight--code)
          (skip-chars-forward "[:alnum:]µμ")
          (setq found (list start (point) start (point))))
         ((not (looking-at "[[:alpha:]0-9_]"))
          (setq found (list start end start end))))))
    (when found
      (set-match-data found)
      t)))

(defconst portlight-font-lock-keywords
  (let ((name portlight--name) (node portlight--node) (space portlight--space))
    `(;; A line is a path if its first word stands before -[, whatever the word.
      (,(portlight--found 1 "^[ \t]*\\(" node "\\)[ \t]*[-−]\\[") (1 'portlight-node))
      ;; Statements.
      (,(portlight--found 2 "^[ \t]*\\(ground\\)[ \t]+\\(" node "\\)")
       (1 font-lock-keyword-face) (2 'portlight-node))
      (,(portlight--found 2 "^[ \t]*\\(let\\|function\\|subnetwork\\)[ \t]+\\(" name "\\)")
       (1 font-lock-keyword-face) (2 font-lock-variable-name-face))
      (,(portlight--found 1 "^[ \t]*subnetwork[ \t]+" name "[ \t]*\\(([^)#\n]*\\)")
       (1 'portlight-node))
      (,(portlight--found 5 "^[ \t]*\\(port\\)[ \t]+\\(" name "\\)\\(?:[ \t]+\\(at\\)\\(?:[ \t]+\\(" node
                          "\\)\\(?:[ \t]+\\(" node "\\)\\)?\\)?\\)?")
       (1 font-lock-keyword-face) (2 font-lock-variable-name-face)
       (3 font-lock-keyword-face nil t) (4 'portlight-node nil t) (5 'portlight-node nil t))
      (,(portlight--found 2 "^[ \t]*\\(tell\\)[ \t]+\\(initial\\|poles\\|zeros\\)" space)
       (1 font-lock-keyword-face) (2 font-lock-keyword-face))
      (,(portlight--found 3 "^[ \t]*\\(tell\\)[ \t]+\\(matrix\\)[ \t]+\\(abcd\\|[zyhgs]\\)[ \t]*\\[")
       (1 font-lock-keyword-face) (2 font-lock-keyword-face) (3 font-lock-builtin-face))
      (,(portlight--found 2 "^[ \t]*\\(start\\)[ \t]+\\(rest\\|steady\\)" space)
       (1 font-lock-keyword-face) (2 font-lock-keyword-face))
      (,(portlight--found 3 "^[ \t]*\\(prefer\\)[ \t]+\\(" portlight--kinds "\\)[ \t]+\\(E[0-9]+\\)")
       (1 font-lock-keyword-face) (2 font-lock-type-face) (3 font-lock-keyword-face))
      (,(portlight--found 2 "^[ \t]*\\(allow\\)[ \t]+\\([a-z][a-z-]*\\)")
       (1 font-lock-keyword-face) (2 'portlight-node))
      (,(portlight--found 1 "^[ \t]*\\(ground\\|let\\|port\\|function\\|tell\\|require\\|start\\|prefer"
                          "\\|allow\\|use\\|subnetwork\\)" space)
       (1 font-lock-keyword-face))
      ;; Parts and uses of subnetworks, as statements or in a box.
      (,(portlight--found 3 portlight--opens "\\(part\\)[ \t]+\\(" name "\\)\\(?:[ \t]*=[ \t]*\\(" name "\\)\\)?")
       (1 font-lock-keyword-face) (2 font-lock-variable-name-face) (3 font-lock-variable-name-face nil t))
      (,(portlight--found 2 portlight--opens "\\(" portlight--kinds "\\)[ \t]+\\(" name "\\)")
       (1 font-lock-type-face) (2 font-lock-variable-name-face))
      ;; Terminals and options.
      (,(portlight--found 3 portlight--comma "\\(primary\\|secondary\\)[ \t]+\\(at\\)[ \t]+\\(" node
                          "\\(?:[ \t]+" node "\\)?\\)")
       (1 font-lock-keyword-face) (2 font-lock-keyword-face) (3 'portlight-node))
      (,(portlight--found 3 portlight--comma "\\(output\\)[ \t]+\\(at\\)[ \t]+\\(" node "\\)[ \t]*\\(?:[],|#]\\|$\\)")
       (1 font-lock-keyword-face) (2 font-lock-keyword-face) (3 'portlight-node))
      (,(portlight--found 3 portlight--comma "\\([-+−]\\|" name "\\)[ \t]+\\(at\\)[ \t]+\\(" node
                          "\\)[ \t]*\\(?:[],|#]\\|$\\)")
       (1 'portlight-node) (2 font-lock-keyword-face) (3 'portlight-node))
      (,(portlight--found 2 ",[ \t]*\\(between\\)[ \t]+\\(" name "\\(?:[ \t]+" name "\\)?\\)")
       (1 font-lock-keyword-face) (2 'portlight-node))
      (,(portlight--found 1 ",[ \t]*\\(rated\\|initially\\|gain\\|resistance\\|between\\|primary"
                          "\\|secondary\\|output\\)" space)
       (1 font-lock-keyword-face))
      ;; Quantities, wiring.
      (,(portlight--found 2 "\\_<\\([vizyp]\\|thevenin\\|norton\\)\\(\\[[^]#\n]*]?\\)")
       (1 font-lock-builtin-face) (2 'portlight-node))
      (,(portlight--found 2 "^[ \t]*tell[ \t]+matrix[ \t]+\\(abcd\\|[zyhgs]\\)[ \t]*\\(\\[[^]#\n]*]?\\)")
       (2 'portlight-node))
      (,(portlight--found 2 "\\([-−]\\[\\|||\\)[ \t]*\\(" name "\\)[ \t]*\\(?:[]|]\\|$\\)")
       (1 'portlight-wire) (2 'portlight-node))
      (,(portlight--found 1 "\\(]\\)[-−]\\[") (1 'portlight-wire))
      (,(portlight--found 2 "\\(][-−]\\)[ \t]*\\(" node "\\)") (1 'portlight-wire) (2 'portlight-node))
      (,(portlight--found 1 "\\([-−]\\[\\|||\\)") (1 'portlight-wire))
      (,(portlight--found 1 "\\(][-−]?\\)") (1 'portlight-wire))
      ;; Numbers with their units.
      (portlight--found-number (1 'portlight-number) (2 'portlight-unit nil t))
      (,(portlight--found 1 "[ \t)]in[ \t]+\\(Hz\\|rad/s\\)") (1 'portlight-unit))
      ;; Words in their place, and calls.
      (,(portlight--found 1 "[ \t=,:]\\(opens\\|closes\\)[ \t]+at[ \t]") (1 font-lock-keyword-face))
      (,(portlight--found 1 "[ \t=]\\(ideal\\)\\(?:[] \t,]\\|$\\)") (1 font-lock-keyword-face))
      (,(portlight--found 1 "[] \t,)]\\(at\\|before\\|from\\|to\\|in\\|with\\|without\\|because\\|reference"
                          "\\|of\\|open\\|closed\\|nominal\\)\\(?:[ \t,]\\|$\\)")
       (1 font-lock-keyword-face))
      (,(portlight--found 1 "\\_<\\(" name "\\)(") (1 font-lock-function-name-face))))
  "Colours of `portlight-mode'.")

(defun portlight--comment-face (state)
  "The face of a comment or string, given the parser's STATE at its start."
  (cond
   ((nth 3 state) font-lock-string-face)
   ((eq (char-after (1+ (nth 8 state))) ?#) font-lock-doc-face)
   (t font-lock-comment-face)))

;;;###autoload
(define-derived-mode portlight-mode prog-mode "Portlight"
  "Major mode for Portlight networks."
  (setq-local comment-start "# ")
  (setq-local comment-start-skip "#+[ \t]*")
  (setq-local indent-tabs-mode nil)
  (setq-local tab-width 2)
  (setq-local font-lock-defaults
              '(portlight-font-lock-keywords
                nil nil nil nil
                (font-lock-syntactic-face-function . portlight--comment-face))))

;;;###autoload
(add-to-list 'auto-mode-alist '("\\.plight\\'" . portlight-mode))

(defun portlight--contact (&rest _)
  "The command line of the server."
  (list portlight-command "serve"))

(defvar eglot-server-programs)
(with-eval-after-load 'eglot
  (add-to-list 'eglot-server-programs '(portlight-mode . portlight--contact)))

(defvar lsp-language-id-configuration)
(declare-function lsp-register-client "lsp-mode")
(declare-function make-lsp-client "lsp-mode")
(declare-function lsp-stdio-connection "lsp-mode")
(with-eval-after-load 'lsp-mode
  (add-to-list 'lsp-language-id-configuration '(portlight-mode . "portlight"))
  (lsp-register-client
   (make-lsp-client :new-connection (lsp-stdio-connection #'portlight--contact)
                    :major-modes '(portlight-mode)
                    :server-id 'portlight)))

(provide 'portlight-mode)
;;; portlight-mode.el ends here
