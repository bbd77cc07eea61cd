/* SPDX-License-Identifier: MIT
 * What the files of a plan share: memory of a view, texts of a window, the user's choices, stored plans. Nothing else includes it but tests. */
#ifndef WANE_TUI_PLAN_PARTS_H
#define WANE_TUI_PLAN_PARTS_H

#include "db/plans.h"
#include "tui/plan_make.h"
#include "tui/plan_time.h"

struct plan_choices;

/* --- memory: zeroed pieces that live until plan_view_free; NULL, and v->arena marked, when there is none --- */
void *plan_alloc(struct plan_view *v, size_t n, size_t size);
const char *plan_copy(struct plan_view *v, const char *text); /* "" when there is no memory: ask plan_memory at the end */
const char *plan_copy_n(struct plan_view *v, const char *text, size_t n);
/* ST_MEMORY when some piece could not be had since the view began. */
MUST_USE enum status plan_memory(const struct plan_view *v, struct err *e);

/* A view without a plan: nothing is owned yet, every text of its head "". */
struct plan_view plan_empty(const struct run *r, const struct night_view *night, const struct plan_rules *rules);

/* The choices that a view was made with, for storing it. NULL until they are set. */
void plan_choices_set(struct plan_view *v, const struct plan_choices *c);
const struct plan_choices *plan_choices_of(const struct plan_view *v);

/* --- figures --- */
/* A member has a text more than there are columns: the pad of the reserve [min], which says when to be on target for the egress alone. */
const char *member_pad(const struct plan_member_view *m);
/* Figures of a window of the night's list as texts. Worth and variant are the caller's. */
void member_from_window(struct plan_view *v, struct plan_member_view *m, const struct window *w, const struct night *n);
/* The same from a stored text, `name=value` with a tab between; names that are no column any more are passed over. */
void member_from_text(struct plan_view *v, struct plan_member_view *m, const char *text);
/* The text to store; NULL no memory. The view's. */
const char *member_text(struct plan_view *v, const struct plan_member_view *m);
/* Position, magnitude, ephemeris of a member as the run knows them now. */
MUST_USE enum status member_target(struct plan_view *v, struct plan_member_view *m, struct err *e);
/* Key of an item: `S<site>/O<telescope>/T<target>:transit:<epoch>:<branch>`, several windows joined by `+` in the order of these texts. */
const char *item_key(struct plan_view *v, const struct plan_item_view *item);
/* Which prepared target of the run has this id, or, 0, this name; NULL none. */
const struct prepared *run_prepared(const struct run *r, int64_t id, const char *name);
/* Id of the run's telescope; 0 the site's unnamed one. */
int64_t plan_telescope_id(const struct run *r);

/* --- the user's choices --- */
enum choice_kind { CHOICE_PIN, CHOICE_DROP, CHOICE_BLOCK, CHOICE_LOST, CHOICE_POOR, CHOICE_KINDS };
struct plan_choice {
	enum choice_kind kind;
	const char *text; /* as typed */
};
enum { CHOICES_MAX = 320, POOR_NOISE_MAX = 20 };
/* An item that has begun and of which lost time took limbs. was: what its members were before, `variant=worth`, comma between; note: what was lost. */
struct plan_cut {
	const char *key, *was, *note;
};
struct plan_choices {
	size_t n;
	struct plan_choice choice[CHOICES_MAX];
	size_t n_missed;
	const char *missed[CHOICES_MAX]; /* keys of items that were never begun */
	size_t n_cut;
	struct plan_cut cut[CHOICES_MAX];
	/* not stored: keys of items that had begun and were let go of though a limb is ahead; planned anew they lose their mark */
	size_t n_reopened;
	const char *reopened[CHOICES_MAX];
};
/* Stored lines to choices and blocks as they were shown. A line that can't be read is passed over. */
void choices_read(struct plan_view *v, struct plan_choices *c, const char *lines);
/* Lines to store: choices, then v's blocks as resolved, items that were never begun, items of which limbs were lost. NULL no memory. */
const char *choices_text(struct plan_view *v, const struct plan_choices *c);
/* What is wished, laid over what is stored: a pin takes the drop of the same event away and the other way round. */
MUST_USE enum status choices_wish(struct plan_view *v, struct plan_choices *c, const struct plan_wish *wish, struct err *e);

/* A target of the run by what was typed: `NAME` or `NAME@EPOCH`. */
struct event_name {
	const struct target *target;
	bool one; /* the epoch was given */
	long epoch;
};
MUST_USE enum status event_name_find(const struct run *r, const char *text, struct event_name *out, struct err *e);

/* v->block from choices and standing blocks; echo (may be NULL) gets a line for each time in `wish`. */
struct echo {
	char *text; /* the caller's to free */
	size_t n;
	bool failed;
};
void echo_line(struct echo *echo, const char *line);
void echo_add(struct echo *echo, const char *what, const struct plan_clock *clock, double from_d, double to_d);
MUST_USE enum status blocks_resolve(struct plan_view *v, const struct plan_choices *c, const struct plan_clock *clock,
				    const struct plan_wish *wish, struct echo *echo, struct err *e);
/* Takes blocks and lost time off the free time of the night. */
void blocks_free_time(const struct plan_view *v, const struct night *night, struct free_time *free);
/* Marks the blocks in which the telescope does something while the Sun is not well below the horizon. */
void blocks_near_sun(struct plan_view *v);
/* Share of its worth that poor time takes of an event: by the share of [T1, T4] in it, 1 - 1/N^2. */
double poor_share(const struct plan_view *v, const struct night *night, const struct window *w);

/* --- stored plans --- */
/* The plan that a wish is about; *out zeroed, ST_OK and id 0 when there is none. */
MUST_USE enum status stored_find(struct run *r, int32_t evening_mjd, const char *draft, struct plan_row *out, struct err *e);
/* Fills a view from it: items, blocks, left out; choices for working it out anew. */
MUST_USE enum status stored_view(struct plan_view *v, const struct plan_row *row, struct plan_choices *c, struct err *e);
/* An item from its row. */
MUST_USE enum status stored_item(struct plan_view *v, struct plan_item_view *item, const struct plan_item_row *row, struct err *e);
/* What today's ephemerides would move. */
MUST_USE enum status stored_moves(struct plan_view *v, double moved_min, struct err *e);
/* What the night's plans have been through: revisions, and, where with_gone, what was kept once and is in v no more. */
MUST_USE enum status stored_past(struct plan_view *v, bool with_gone, struct err *e);

/* Says which limits and rules of moving are not those that a stored plan, now worked out anew, was made with. Texts of plan_limits_text. */
void limits_echo(struct echo *echo, const char *stored, const char *now);
/* Effective limits and rules of moving, `name=value` with a tab between; NULL no memory. */
const char *plan_limits_text(struct plan_view *v);
/* What was left out, a line each: target, kind, epoch, reason, cost. NULL no memory. */
const char *left_text(struct plan_view *v);

/* --- limbs and lost time --- */
/* Limbs of an item's events. planned: those that the item holds. */
struct limbs {
	int planned, hit, before; /* all; taken by lost time; over by now, and before what was taken */
	double hit_until_d;	  /* end of the last limb that was taken; -INFINITY none */
	bool in_hit, out_hit;
	bool ahead; /* an egress that was not planned is still to come */
};
struct limbs item_limbs(const struct plan_view *v, const struct plan_item_view *item, double now_d);
/* An item that has begun keeps of each event the limbs that lost time left, with their worth, and says in its note what was lost; *c remembers what it was. Its members are
 * copies. false: no memory. */
bool cut_item(struct plan_view *v, struct plan_choices *c, struct plan_item_view *item, double now_d);
/* Makes it again what it was before it was cut: `cut` is what was remembered. false: no memory. */
bool uncut_item(struct plan_view *v, const struct plan_cut *cut, struct plan_item_view *item);
const struct plan_cut *cut_of(const struct plan_cut cut[], size_t n, const char *key); /* NULL none */
/* Adds what was lost to the note of an item, once. */
void cut_note(struct plan_view *v, const struct plan_cut *cut, struct plan_item_view *item);

/* --- proposals --- */
/* What stands when a plan is worked out anew. */
struct plan_standing {
	size_t n;
	const struct plan_item_view **item; /* all that stay in the list, in order of time */
	bool *fixed;			    /* they take the telescope's time still */
	/* let go of, offered anew for the sake of a limb ahead; they stay in the list as lost where nothing comes of that */
	size_t n_reopened;
	const struct plan_item_view **reopened;
	double not_before_d;
};
/* Sorts the items of a stored plan into those that stand and those to be planned anew. */
MUST_USE enum status plan_stand(struct plan_view *v, const struct plan_wish *wish, const struct plan_clock *clock,
				struct plan_choices *c, struct echo *echo, struct plan_standing *out, struct err *e);
/* The running order of v->night: items, left out, worth. */
MUST_USE enum status plan_propose(struct plan_view *v, const struct plan_choices *c, const struct plan_standing *standing, bool costs,
				  struct err *e);
/* Why an offer of a plan was left out, in words. fixed_item: which standing item each fixed one is; costs: whether they were worked out. The view's. */
const char *left_words(struct plan_view *v, const struct night_plan *p, const struct plan_offer offer[],
		       const struct plan_left *left, const struct plan_standing *standing, const size_t fixed_item[],
		       bool costs);
/* --- words --- */
/* `02:11 MDT`, with the date where it is neither that of the evening nor the next. */
enum { PLAN_CLOCK_BYTES = 48, PLAN_NAME_BYTES = 2 * NAME_BYTES_MAX };
void plan_clock_words(const struct plan_view *v, struct utc t, char out[PLAN_CLOCK_BYTES]);
/* `Tern 3 b`, `Tern 3 b with Tern 3 c` */
void plan_item_name(const struct plan_item_view *item, char out[PLAN_NAME_BYTES]);
/* snprintf that cuts between characters. */
void plan_put_words(char *out, size_t room, const char *format, ...) __attribute__((format(printf, 3, 4)));
/* Sentences of what to do when the first limb is missed, for every item of the finished order. */
void plan_if_missed(struct plan_view *v);
/* Items in the light of the night: in_day; order numbers. */
void plan_finish(struct plan_view *v);

#endif
