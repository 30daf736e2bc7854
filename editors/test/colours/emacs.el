;; Prints, for every line of the files on the command line, the line and below
;; it one letter a character: the class in which portlight-mode colours it.
;; ../README.md names the classes.
;; Usage: emacs --batch -Q -L FOLDER-OF-PORTLIGHT-MODE -l emacs.el FILE…
(require 'portlight-mode)
(set-language-environment "UTF-8")

(defconst colours-classes
  '((font-lock-doc-face . "M") (font-lock-comment-face . "C") (font-lock-comment-delimiter-face . "C")
    (font-lock-string-face . "S") (font-lock-keyword-face . "K") (font-lock-type-face . "T")
    (font-lock-variable-name-face . "D") (portlight-wire . "W") (font-lock-builtin-face . "Q")
    (font-lock-function-name-face . "F") (portlight-number . "N") (portlight-unit . "U")))

(defun colours-line ()
  (let (marks)
    (while (not (eolp))
      (let ((face (get-text-property (point) 'face)))
        (push (if (looking-at "[[:space:]]") " "
                (or (cdr (assq (if (consp face) (car face) face) colours-classes)) " "))
              marks))
      (forward-char))
    (replace-regexp-in-string " +\\'" "" (apply #'concat (nreverse marks)))))

(dolist (file command-line-args-left)
  (find-file file)
  (portlight-mode)
  (font-lock-mode 1)
  (font-lock-ensure)
  (goto-char (point-min))
  (while (not (eobp))
    (princ (buffer-substring (line-beginning-position) (line-end-position)))
    (terpri)
    (princ (colours-line))
    (terpri)
    (forward-line)))
(kill-emacs)
