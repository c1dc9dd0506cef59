# Completion of quietslope for bash. To load it for good, add to ~/.bashrc: source <(quietslope completion bash)

_quietslope() {
	local program=quietslope kind word raw add drop
	[[ $1 == */* ]] && program=${1/#\~/$HOME}
	COMPREPLY=()
	{
		IFS= read -r kind
		case $kind in
		words)
			while IFS= read -r word; do COMPREPLY+=("$word"); done
			return
			;;
		studies | files | folders)
			IFS= read -r raw  # as typed
			IFS= read -r add  # what readline takes for part of the name
			IFS= read -r drop # what readline does not take for part of it
			;;
		*) return ;;
		esac
	} < <("$program" --complete bash "${COMP_LINE:0:COMP_POINT}" "$COMP_WORDBREAKS" 2>/dev/null)

	type compopt >/dev/null 2>&1 && compopt -o filenames 2>/dev/null
	while IFS= read -r word; do
		COMPREPLY+=("$add${word#"$drop"}")
	done < <(
		compgen -d -- "$raw"
		case $kind in
		studies)
			compgen -f -X '!*.yaml' -- "$raw"
			compgen -f -X '!*.yml' -- "$raw"
			;;
		files) compgen -f -- "$raw" ;;
		esac
	)
}

complete -F _quietslope quietslope
