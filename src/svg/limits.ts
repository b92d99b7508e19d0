/** What one SVG file may ask for. Each limit ends the reading with an InputError that names it. */

/** "An SVG over 32 MB": bytes of UTF-8. */
export const MAX_SVG_BYTES = 32_000_000;

/** Elements in the file. */
export const MAX_ELEMENTS = 2_000_000;

/** Elements that `use` draws again, each counted as often as it is drawn. */
export const MAX_COPIES = 500_000;

/** Commands of all paths together, each path counted as often as `use` draws it. */
export const MAX_PATH_COMMANDS = 4_000_000;

/** Names of enclosing groups, summed over the groups that hold a shape: bounds what deep nesting can ask for. */
export const MAX_GROUP_NAMES = 20_000_000;

/** Steps of matching `<style>` selectors against elements. */
export const MAX_SELECTOR_STEPS = 200_000_000;

/** Characters that the file's own DOCTYPE entities may expand to. */
export const MAX_ENTITY_CHARACTERS = 1_000_000;
