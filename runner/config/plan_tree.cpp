#include "runner/config/plan_tree.hpp"

#include <algorithm>
#include <iterator>
#include <map>

#include "runner/world/printable.hpp"

namespace halflsb {

namespace {

bool is_list_of_tables(const TomlValue& value) {
    return value.kind == TomlValue::Kind::array && !value.items.empty() &&
           std::all_of(value.items.begin(), value.items.end(),
                       [](const TomlValue& item) { return item.kind == TomlValue::Kind::table; });
}

/// `later` behind `earlier`, both of one table.
void join(TomlValue& earlier, TomlValue later, bool is_top, Problems& problems) {
    for (TomlEntry& entry : later.entries) {
        const auto same = std::find_if(earlier.entries.begin(), earlier.entries.end(),
                                       [&](const TomlEntry& other) { return other.key == entry.key; });
        if (same == earlier.entries.end()) {
            earlier.entries.push_back(std::move(entry));
        } else if (same->value.kind == TomlValue::Kind::table && entry.value.kind == TomlValue::Kind::table) {
            join(same->value, std::move(entry.value), false, problems);
        } else if (is_top && is_list_of_tables(same->value) && is_list_of_tables(entry.value)) {
            std::move(entry.value.items.begin(), entry.value.items.end(), std::back_inserter(same->value.items));
        } else {
            problems.add(entry.key_place,
                         quoted(entry.key) + " is given a second time, the first in " +
                             problems.line_text(same->key_place, entry.key_place),
                         "keep one of the two");
        }
    }
    // What is missing in a table is told where the including file has it.
    earlier.place = later.place;
}

class Includes {
public:
    Includes(ReadContext& context, std::deque<SourceText>& sources, const std::string& plan_path)
        : context_(context), sources_(sources) {
        chain_.push_back({printable(plan_path), identity_of(plan_path)});
    }

    /// The tree of a file with all that it includes in front.
    TomlValue joined(TomlValue own) {
        const auto include = std::find_if(own.entries.begin(), own.entries.end(),
                                          [](const TomlEntry& entry) { return entry.key == include_word; });
        if (include == own.entries.end()) return own;
        const TomlValue list = std::move(include->value);
        own.entries.erase(include);
        TomlValue all;
        all.place = own.place;
        if (list.kind != TomlValue::Kind::array || list.items.empty()) {
            refuse(list.place,
                   list.kind == TomlValue::Kind::array ? "include is empty"
                                                       : "include is " + kind_text(list) + ", wanted a list of files",
                   "write include = [\"common.toml\"], with paths under the root, or leave it out");
        } else {
            for (const TomlValue& item : list.items) join(all, read(item, own), true, context_.problems);
        }
        join(all, std::move(own), true, context_.problems);
        return all;
    }

    bool is_complete() const { return is_complete_; }

private:
    struct Link {
        std::string shown, identity;
    };

    /// The same for all names of one file.
    std::string identity_of(const std::string& path) const {
        const std::string resolved = context_.files.resolved(path);
        return resolved.empty() ? path : resolved;
    }

    void refuse(Place place, std::string_view problem, std::string_view remedy) {
        context_.problems.add(place, problem, remedy);
        is_complete_ = false;
    }

    /// What an include names, or an empty table after a report.
    TomlValue read(const TomlValue& item, const TomlValue& including) {
        if (item.kind != TomlValue::Kind::text) {
            refuse(item.place, "in include stands " + kind_text(item) + ", wanted the name of a file",
                   "write include = [\"common.toml\"], with paths under the root");
            return {};
        }
        if (++count_ > most_included_files) {
            if (count_ == most_included_files + 1) {
                refuse(item.place, "more than " + std::to_string(most_included_files) + " files are included",
                       "join some of them");
            }
            return {};
        }
        const auto bytes = context_.read_named_file(item.text, largest_config_bytes);
        if (!bytes) {
            refuse(item.place, "include " + quoted(item.text) + ": " + printable(bytes.error().problem),
                   printable(bytes.error().remedy));
            return {};
        }
        const std::string name = context_.root + "/" + item.text;
        chain_.push_back({printable(name), identity_of(name)});
        TomlValue tree;
        if (is_new(item.place)) tree = parsed(item, name, std::string(*bytes), including);
        chain_.pop_back();
        return tree;
    }

    /// Whether the file at the end of the chain was not read before.
    bool is_new(Place place) {
        const auto is_same = [&](const Link& link) { return link.identity == chain_.back().identity; };
        if (const auto loop = std::find_if(chain_.begin(), chain_.end() - 1, is_same); loop != chain_.end() - 1) {
            refuse(place, "the includes run in a circle: " + chain_text(loop - chain_.begin()),
                   "take one of these includes out");
            return false;
        }
        const auto [first, is_first] = read_before_.emplace(chain_.back().identity, chain_text(0));
        if (!is_first) {
            refuse(place, "the file is included twice: " + first->second + ", and " + chain_text(0),
                   "keep one of the two includes");
        }
        return is_first;
    }

    std::string chain_text(std::ptrdiff_t first) const {
        std::string text;
        for (auto link = chain_.begin() + first; link != chain_.end(); ++link) {
            text += (text.empty() ? "" : " -> ") + link->shown;
        }
        return text;
    }

    TomlValue parsed(const TomlValue& item, const std::string& name, std::string bytes, const TomlValue& including) {
        const SourceText& source = sources_.emplace_back(name, std::move(bytes));
        const int index = context_.problems.add_source(source, item.text);
        auto tree = parse_document(source, "docs/plan.md", index);
        if (auto* problem = std::get_if<std::string>(&tree)) {
            refuse(item.place, "include " + quoted(item.text) + ": the file is no plan",
                   "correct it; the next message says where");
            context_.problems.add_rendered(item.place, std::move(*problem));
            return {};
        }
        TomlValue all = joined(std::get<TomlValue>(std::move(tree)));
        if (including.find("title") != nullptr) {
            std::erase_if(all.entries, [](const TomlEntry& entry) { return entry.key == "title"; });
        }
        return all;
    }

    ReadContext& context_;
    std::deque<SourceText>& sources_;
    std::vector<Link> chain_;                         ///< from the plan to the file that is being read
    std::map<std::string, std::string> read_before_;  ///< by identity: the chain that led there
    std::size_t count_ = 0;
    bool is_complete_ = true;
};

}  // namespace

bool join_includes(Document& document, ReadContext& context, std::deque<SourceText>& sources) {
    Includes includes(context, sources, document.source.name());
    document.tree = includes.joined(std::move(document.tree));
    return includes.is_complete();
}

}  // namespace halflsb
