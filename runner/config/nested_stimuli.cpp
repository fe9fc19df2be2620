#include "runner/config/nested_stimuli.hpp"

#include <string>

#include "stimuli/stimulus.hpp"

namespace halflsb {

std::optional<std::shared_ptr<const std::vector<StimulusWords>>> read_nested_stimuli(std::string_view name,
                                                                                     const TomlValue& array,
                                                                                     ReadContext& context,
                                                                                     const TableReader* owner) {
    const std::size_t before = context.problems.count();
    const std::string how =
        "write " + std::string(name) + " = [{ shape = \"step\", ... }, ...], or each under a header";
    if (array.items.empty()) {
        context.problems.add(array.place, std::string(name) + " is empty", "give it at least one stimulus");
        return std::nullopt;
    }
    // "parts[2].add[1]": the way messages and makers call it, too.
    const bool is_inside = owner != nullptr && owner->title().find('[') != 0;
    const std::string prefix = is_inside ? owner->title() + "." : std::string();
    auto stimuli = std::make_shared<std::vector<StimulusWords>>();
    for (std::size_t i = 0; i < array.items.size(); ++i) {
        const TomlValue& item = array.items[i];
        if (item.kind != TomlValue::Kind::table) {
            context.problems.add(item.place,
                                 "in " + std::string(name) + " stands " + kind_text(item) + ", wanted tables", how);
            continue;
        }
        TableReader reader(context, item, prefix + std::string(name) + "[" + std::to_string(i + 1) + "]",
                           item.is_inline ? nullptr : owner);
        const Recipe* recipe = reader.chosen_recipe("shape", stimulus_recipes());
        if (recipe == nullptr) continue;
        ParameterValues values = reader.parameters(*recipe, name == added_stimuli_word ? length_word : "");
        reader.refuse_unknown_keys();
        stimuli->push_back({std::string(recipe->name), std::move(values)});
    }
    if (context.problems.count() != before) return std::nullopt;
    return stimuli;
}

void set_seeds(const Recipe& recipe, ParameterValues& values, std::uint64_t seed) {
    for (const Parameter& parameter : recipe.parameters) {
        if (parameter.name == "seed") values.set("seed", static_cast<std::int64_t>(seed));
        if (parameter.type != ParameterType::stimuli || !values.has(parameter.name)) continue;
        auto inner = std::make_shared<std::vector<StimulusWords>>(values.stimuli(parameter.name));
        for (StimulusWords& words : *inner) {
            if (const Recipe* shape = find_recipe(stimulus_recipes(), words.shape))
                set_seeds(*shape, words.values, seed);
        }
        values.set(std::string(parameter.name), std::shared_ptr<const std::vector<StimulusWords>>(std::move(inner)));
    }
}

}  // namespace halflsb
