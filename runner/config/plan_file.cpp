#include "runner/config/plan_file.hpp"

#include <algorithm>
#include <deque>
#include <iterator>
#include <map>
#include <set>

#include "oracle/judge/admission.hpp"
#include "oracle/judge/case_judge.hpp"
#include "oracle/judge/companion_case.hpp"
#include "runner/config/document.hpp"
#include "runner/config/plan_each.hpp"
#include "runner/config/plan_reader.hpp"
#include "runner/config/plan_tree.hpp"
#include "runner/config/plan_words.hpp"
#include "runner/config/standard_set.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

/// A case's own rule takes the place of those for every case of the same kind, but those of the standard set stand
/// back; the latency of 0 that every case has without asking comes last.
void add_common_rules(Case& the_case, const std::vector<Rule>& common, bool filter_is_unknown) {
    const auto kind_is = [](const Rule& a) { return [&a](const Rule& b) { return a.kind.index() == b.kind.index(); }; };
    if (the_case.is_standard) {
        std::erase_if(the_case.rules,
                      [&](const Rule& rule) { return std::any_of(common.begin(), common.end(), kind_is(rule)); });
    }
    const std::vector<Rule> own = the_case.rules;
    for (const Rule& rule : common) {
        if (std::none_of(own.begin(), own.end(), kind_is(rule))) the_case.rules.push_back(rule);
    }
    if (filter_is_unknown) return;
    const Rule latency{LatencyRule{0, true}, the_case.position};
    if (std::none_of(the_case.rules.begin(), the_case.rules.end(), kind_is(latency))) the_case.rules.push_back(latency);
}

Place place_of(const PlanPosition& position, const Problems& problems) {
    return problems.place_in(position.file, position.line, position.column);
}

/// A latency rule for every case is asked of the cases that can tell it and left to them by the others,
/// as the implicit one is; when none can, it is refused.
void settle_common_latency(Plan& plan, const std::vector<Rule>& common, bool is_whole, Problems& problems) {
    const auto written = std::find_if(common.begin(), common.end(),
                                      [](const Rule& r) { return std::holds_alternative<LatencyRule>(r.kind); });
    if (written == common.end()) return;
    bool is_asked = false, is_told = false;
    for (Case& the_case : plan.cases) {
        for (Rule& rule : the_case.rules) {
            auto* latency = std::get_if<LatencyRule>(&rule.kind);
            if (latency == nullptr || rule.position != written->position) continue;
            is_asked = true;
            latency->implicit = !latency_evidence(plan, the_case).can_tell;
            is_told = is_told || !latency->implicit;
        }
    }
    // A case that was refused for something else might have told it.
    if (is_whole && is_asked && !is_told) {
        problems.add(place_of(written->position, problems), "no case of this plan can tell its latency",
                     "add a case with noise (shape = \"noise\", level_ratio = 0.5, length_samples = 4096), or leave "
                     "the rule out");
    }
}

/// The companions that rules ask for, behind their bases. False: a problem was added.
bool add_companions(Plan& plan, Problems& problems) {
    std::vector<Case> all;
    std::set<std::string> names;
    for (const Case& the_case : plan.cases) names.insert(the_case.name);
    const std::size_t before = problems.count();
    for (const Case& the_case : plan.cases) {
        for (Case& one : with_companions(plan, the_case)) {
            if (one.companion && !names.insert(one.name).second) {
                problems.add(place_of(one.rules.front().position, problems),
                             "what this rule sends again is called " + quoted(one.name) +
                                 ", and so is another case or another rule's",
                             "rename that case, or keep one of the two rules");
            }
            all.push_back(std::move(one));
        }
        if (all.size() <= most_cases) continue;
        problems.add(place_of(the_case.position, problems),
                     "with what its rules send again the plan has more than " + std::to_string(most_cases) + " cases",
                     "give the rules to fewer cases");
        return false;
    }
    plan.cases = std::move(all);
    return problems.count() == before;
}

/// Whether it says something under rule, be it wrong.
bool has_rule(const TomlValue& table) {
    const TomlEntry* entry = table.find("rule");
    return entry != nullptr && !(entry->value.kind == TomlValue::Kind::array && entry->value.items.empty());
}

class PlanFile {
public:
    PlanFile(Document document, const std::string& path, const Files& files, const PlanOptions& options)
        : document_(std::move(document)),
          tree_(document_.tree),
          shown_name_(options.shown_name.empty() ? path : options.shown_name),
          options_(options),
          problems_(document_.source, shown_name_),
          context_{problems_, files, options.root.empty() ? folder_of(path) : options.root, std::nullopt, {}} {}

    PlanFile(const PlanFile&) = delete;
    PlanFile& operator=(const PlanFile&) = delete;

    std::variant<Plan, ReadProblems> read() {
        if (!join_includes(document_, context_, included_)) return problems_.sorted();
        TableReader top(context_, tree_, "");
        const ParameterValues values = top.parameters(plan_recipe());
        plan_.certainty = {*values.number(plan_recipe(), "alpha"), *values.number(plan_recipe(), "beta"),
                           *values.number(plan_recipe(), "confidence")};
        plan_.streams_whole = values.text(plan_recipe(), "stream") == "whole";
        // All words of the top are known before the tables below are read: the trap of a top-level key
        // under a header is told by them.
        for (const std::string_view key : {"signal", "arithmetic", "filter", "rule", "case"}) top.entry(key);
        top.entry(include_word);
        const auto signal = read_signal(context_, top);
        if (signal) context_.nyquist_hz = signal->rate_hz / 2.0;
        const auto filters = read_filters(context_, top, signal ? &*signal : nullptr);
        const PlanFacts facts{signal ? &*signal : nullptr, filters ? &*filters : nullptr};
        const ReadRules common = read_rules(context_, top, facts);
        std::vector<ReadCase> cases;
        if (!lacks_cases()) {
            cases = read_cases(top, facts);
            check_presence(top, common);
        } else if (signal && filters) {
            cases = read_standard_set(top, facts);
        }
        top.refuse_unknown_keys();

        if (signal && filters && common.is_clean) admit(facts, common.rules, cases);
        if (problems_.count() > 0) return problems_.sorted();
        plan_.title = *values.text(plan_recipe(), "title");
        plan_.parts.push_back({"", std::move(document_.bytes)});
        std::move(context_.parts.begin(), context_.parts.end(), std::back_inserter(plan_.parts));
        return std::move(plan_);
    }

private:
    std::vector<ReadCase> read_cases(TableReader& top, const PlanFacts& facts) {
        std::vector<CaseExpansion> expansions;
        for (const TomlValue* table : top.tables("case")) expansions.emplace_back(*table, problems_);
        std::vector<ReadCase> cases;
        const TomlEntry* common = tree_.find("rule");
        if (has_too_many(expansions, common == nullptr ? 0 : common->value.items.size(), problems_)) return cases;
        std::map<std::string, Place> names;
        for (const CaseExpansion& expansion : expansions) {
            if (!expansion.is_clean()) continue;
            const auto count = static_cast<std::size_t>(expansion.count());
            for (std::size_t i = 0; i < count; ++i) {
                const auto table = expansion.at(i, problems_);
                if (!table) continue;
                cases.push_back(read_case(context_, *table, top, facts, options_.seed));
                check_name(cases.back(), names);
            }
        }
        return cases;
    }

    void check_name(const ReadCase& read, std::map<std::string, Place>& names) {
        if (!read.name_place) return;
        const auto [first, is_new] = names.emplace(read.the_case.name, *read.name_place);
        if (is_new) return;
        problems_.add(*read.name_place,
                      "two cases are called " + quoted(read.the_case.name) + ", the other one in " +
                          problems_.line_text(first->second, *read.name_place),
                      "give each case a name of its own; --case chooses by it");
    }

    bool lacks_cases() const {
        const TomlEntry* cases = tree_.find("case");
        return cases == nullptr || (cases->value.kind == TomlValue::Kind::array && cases->value.items.empty());
    }

    /// The cases of a plan that has none.
    std::vector<ReadCase> read_standard_set(TableReader& top, const PlanFacts& facts) {
        if (facts.filters->is_unknown) {
            top.refuse(top.place_of("case"), "the file has no [[case]]",
                       "add one with a name, a [case.stimulus] and, unless there is a [[rule]], a [[case.rule]]; the "
                       "standard set needs a filter that is known");
            return {};
        }
        const SourceText& source =
            included_.emplace_back(std::string(standard_set_name), standard_set_text(*facts.signal, *facts.filters));
        const int index = problems_.add_source(source, std::string(standard_set_name));
        auto tree = parse_document(source, "docs/plan.md", index);
        if (const auto* problem = std::get_if<std::string>(&tree)) {
            problems_.add_rendered(top.place(), *problem);
            return {};
        }
        standard_set_ = std::get<TomlValue>(std::move(tree));
        TableReader set(context_, standard_set_, "");
        std::vector<ReadCase> cases = read_cases(set, facts);
        for (ReadCase& read : cases) read.the_case.is_standard = true;
        return cases;
    }

    void check_presence(TableReader& top, const ReadRules& common) {
        const TomlEntry* cases = tree_.find("case");
        const bool has_own = std::any_of(cases->value.items.begin(), cases->value.items.end(),
                                         [](const TomlValue& t) { return has_rule(t); });
        if (!common.first && !has_rule(tree_) && !has_own) {
            top.refuse(top.place(), "the file has no rule, so it judges nothing",
                       "add a [[rule]] for every case, or a [[case.rule]] to one");
        }
    }

    /// Joins what was read, and asks the judge which rules the stimuli cannot answer.
    void admit(const PlanFacts& facts, const std::vector<Rule>& common, std::vector<ReadCase>& cases) {
        plan_.file = shown_name_;
        plan_.signal = *facts.signal;
        plan_.filter = facts.filters->chain;
        plan_.filter_positions = facts.filters->positions;
        plan_.filter_is_unknown = facts.filters->is_unknown;
        const bool is_whole = problems_.count() == 0;
        for (ReadCase& read : cases) {
            if (!read.is_clean) continue;
            add_common_rules(read.the_case, common, plan_.filter_is_unknown);
            plan_.cases.push_back(std::move(read.the_case));
        }
        const std::size_t before = problems_.count();
        finish_cases(context_, plan_);
        if (problems_.count() != before) return;
        settle_common_latency(plan_, common, is_whole, problems_);
        if (!add_companions(plan_, problems_)) return;
        if (!plan_.cases.empty() && plan_.cases.front().is_standard) {
            for (const Refusal& refusal : settle_standard_rules(plan_, common))
                problems_.add(place_of(refusal.position, problems_), refusal.problem, refusal.remedy);
            return;
        }
        for (const Case& the_case : plan_.cases) {
            for (const Refusal& refusal : refusals(plan_, the_case)) {
                problems_.add(place_of(refusal.position, problems_), refusal.problem, refusal.remedy);
            }
        }
    }

    Document document_;
    std::deque<SourceText> included_;
    TomlValue standard_set_;
    const TomlValue& tree_;
    std::string shown_name_;
    PlanOptions options_;
    Problems problems_;
    ReadContext context_;
    Plan plan_;
};

/// Of every shape that has a seed; the table of the shapes has the last word on its range.
std::optional<std::string> seed_problem(std::uint64_t seed) {
    for (const Recipe& recipe : stimulus_recipes()) {
        const Parameter* parameter = find_parameter(recipe, "seed");
        if (parameter != nullptr && !(static_cast<double>(seed) <= parameter->maximum)) {
            return render_without_line("--seed", std::to_string(seed) + " is above " + number_text(parameter->maximum),
                                       "give a smaller seed");
        }
    }
    return std::nullopt;
}

/// Told even when the plan names no file: a mistyped root must not wait for the first one that does.
std::optional<std::string> root_problem(const std::string& root, const Files& files) {
    if (root.empty() || !files.resolved(root + "/.").empty()) return std::nullopt;
    return render_without_line("--root", "there is no folder " + quoted(root),
                               "give a folder that exists; files that the plan names lie under it");
}

}  // namespace

std::variant<Plan, ReadProblems> read_plan(const std::string& path, const Files& files, const PlanOptions& options) {
    if (options.seed) {
        if (auto problem = seed_problem(*options.seed)) return ReadProblems{{std::move(*problem)}};
    }
    if (auto problem = root_problem(options.root, files)) return ReadProblems{{std::move(*problem)}};
    auto document = open_document(path, files, "docs/plan.md");
    if (auto* problems = std::get_if<ReadProblems>(&document)) return std::move(*problems);
    return PlanFile(std::get<Document>(std::move(document)), path, files, options).read();
}

std::variant<Plan, ReadProblems> read_plan_text(const std::string& text, const std::string& path, const Files& files,
                                                const PlanOptions& options) {
    SourceText source(path, text);
    auto tree = parse_document(source, "docs/plan.md");
    if (auto* problem = std::get_if<std::string>(&tree)) return ReadProblems{{std::move(*problem)}};
    Document document{std::move(source), std::get<TomlValue>(std::move(tree)), text};
    return PlanFile(std::move(document), path, files, options).read();
}

}  // namespace halflsb
