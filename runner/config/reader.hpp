// Typed, strict access to a table of a plan or a rig. What may stand in a table is said by a Recipe; a key
// that nobody asked for, a missing one, a wrong type, NaN and a number out of range are gathered as
// Problems with their places, and reading goes on.
#pragma once

#include <deque>
#include <map>
#include <memory>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "runner/config/problems.hpp"
#include "runner/config/toml_tree.hpp"
#include "runner/world/files.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// What reading may need beside the tree.
struct ReadContext {
    Problems& problems;
    const Files& files;
    std::string root;                  ///< of files that the text names
    std::optional<double> nyquist_hz;  ///< for bands and stimulus files, once the sample rate is known
    std::deque<PlanPart> parts = {};   ///< what read_named_file gave so far
    /// Stimulus files already read, by path and rate: many cases may name one.
    std::map<std::string, std::shared_ptr<const SignalFile>> signal_files = {};

    /// The bytes of a file that the text names, by its path under the root. Each is read once and kept for the
    /// record of the run; the view holds as long as this context. Errors are those of Files::read_under_root.
    Outcome<std::string_view> read_named_file(const std::string& path, std::size_t cap_bytes);
    /// What outlives the reading: the file's name, line and column.
    PlanPosition position_of(Place place) const { return {problems.file_of(place), place.line, place.column}; }
};

class TableReader {
public:
    /// `title` is how people write it: "[signal]", "[[case.rule]]"; "" for the top level. `outer` is the
    /// table around it; both must outlive this.
    TableReader(ReadContext& context, const TomlValue& table, std::string title, const TableReader* outer = nullptr);

    /// Every parameter of the recipe: those given come back, in the types that ParameterValues states.
    /// `may_lack` is a required one that may be left out here.
    ParameterValues parameters(const Recipe& recipe, std::string_view may_lack = {});
    /// The recipe that the string under `key` names; reports and gives nullptr when there is none.
    const Recipe* chosen_recipe(std::string_view key, const std::vector<Recipe>& recipes);
    /// The table under `key`; nullptr when absent or reported. `required` reports an absent one.
    const TomlValue* table(std::string_view key, bool required);
    /// The tables of the list under `key`, written [[key]]; empty when absent or reported.
    std::vector<const TomlValue*> tables(std::string_view key);
    /// Any value, for what no Parameter can say; nullptr when absent.
    const TomlEntry* entry(std::string_view key);
    /// After everything was asked for: what else stands there is unknown.
    void refuse_unknown_keys();

    /// The error of a maker (make_stimulus, make_stage, make_rule), at the parameter that it blames. Of what
    /// stands in a list of tables the maker says "parts[2].level_ratio", counting from 1.
    void refuse(const Error& error);
    void refuse(Place place, std::string_view problem, std::string_view remedy);

    /// Nothing was reported since this reader was made, its inner tables included.
    bool is_clean() const { return context_.problems.count() == problems_before_; }
    /// Of the value under `key`, which may be a path as in refuse(error); of the innermost table that is there
    /// when it is not.
    Place place_of(std::string_view key) const;
    Place place() const { return table_.place; }
    const std::string& title() const { return title_; }

private:
    bool knows(std::string_view key) const;
    std::string where() const;
    /// "case.rule" for the key rule in [[case]].
    std::string header_of(std::string_view key) const;

    ReadContext& context_;
    const TomlValue& table_;
    std::string title_, addition_;
    const TableReader* outer_;
    std::size_t problems_before_;
    std::vector<std::string_view> known_;
};

/// One value as its Parameter wants it, or nullopt after a report. `owner` reads the table around it.
std::optional<ParameterValue> read_value(const Parameter& parameter, const TomlEntry& entry, ReadContext& context,
                                         const TableReader* owner = nullptr);

}  // namespace halflsb
