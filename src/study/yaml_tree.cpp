#include "study/yaml_tree.hpp"

#include "study/characters.hpp"
#include "study/yaml_syntax.hpp"

#include <fmt/format.h>
#include <yaml-cpp/eventhandler.h>
#include <yaml-cpp/exceptions.h>
#include <yaml-cpp/parser.h>
#include <algorithm>
#include <sstream>
#include <unordered_map>
#include <utility>

namespace rivalfold {
namespace {

constexpr std::size_t kLongestToken = 400;  // bytes

// Ends the reading of a document whose fault is already noted.
struct Stop {};

std::size_t count_from(int mark) { return mark < 0 ? 0 : static_cast<std::size_t>(mark); }

// A list or map that is being read.
struct Open {
    Node node;
    std::unordered_map<std::string, Place> seen;  // keys of a map
    std::size_t n_children = 0;
    bool skips_value = false;  // the value that follows belongs to a faulty key
    bool in_brackets = false;
};

class TreeBuilder : public YAML::EventHandler {
public:
    TreeBuilder(const SourceText& source, FaultList& faults) : source_(source), faults_(faults) {}

    void OnDocumentStart(const YAML::Mark& mark) override {
        if (n_documents_++ == 0) return;
        if (rest_of_line(mark).starts_with("---"))
            fail(place(mark), "a second document begins here; a study file holds one");
        fail(place(mark), fmt::format("{} stands after the end of the study; expected nothing more", token(mark)),
             "check the indentation and the brackets before it");
    }
    void OnDocumentEnd() override {}

    void OnNull(const YAML::Mark& mark, YAML::anchor_t anchor) override {
        Node node;
        const std::string_view rest = rest_of_line(mark);
        for (const std::string_view written : {"~", "null", "Null", "NULL"})
            if (rest.starts_with(written)) node.text = written;
        node.place = node.text.empty() ? key_place_or(mark) : place(mark);
        check_properties(mark, "?", anchor);
        accept(std::move(node));
    }

    void OnAlias(const YAML::Mark& mark, YAML::anchor_t) override { fail_alias(place(mark), token(mark)); }

    void OnScalar(const YAML::Mark& mark, const std::string& tag, YAML::anchor_t anchor,
                  const std::string& value) override {
        check_properties(mark, tag, anchor);
        check_quote(mark);
        Node node;
        node.kind = Node::Kind::text;
        node.place = place(mark);
        node.text = value;
        node.quoted = tag != "?";
        accept(std::move(node));
    }

    void OnSequenceStart(const YAML::Mark& mark, const std::string& tag, YAML::anchor_t anchor,
                         YAML::EmitterStyle::value style) override {
        open(Node::Kind::list, mark, tag, anchor, style);
    }
    void OnSequenceEnd() override { close(); }
    void OnMapStart(const YAML::Mark& mark, const std::string& tag, YAML::anchor_t anchor,
                    YAML::EmitterStyle::value style) override {
        open(Node::Kind::map, mark, tag, anchor, style);
    }
    void OnMapEnd() override { close(); }

    // Notes what the YAML library found wrong, in our words.
    void note(const YAML::ParserException& error);
    bool note_indentation(const YAML::ParserException& error);
    Node take() { return std::move(root_); }

private:
    [[noreturn]] void fail(Place place, std::string message, std::string hint = {}) {
        faults_.add(place, std::move(message), std::move(hint));
        throw Stop();
    }
    [[noreturn]] void fail_alias(Place place, const std::string& name) {
        fail(place, fmt::format("{} is an alias, which a study file may not hold; expected the value itself", name),
             fmt::format("text that begins with * must stand in quotes: {}", name));
    }

    Place place(const YAML::Mark& mark) const { return source_.place(count_from(mark.line), count_from(mark.column)); }
    std::size_t offset(const YAML::Mark& mark) const {
        return source_.offset(count_from(mark.line), count_from(mark.column));
    }
    // Cut where no message would still show it: a line may be long.
    std::string_view line_from(std::size_t offset) const {
        const std::string_view rest = std::string_view(source_.text()).substr(offset, kLongestToken);
        return rest.substr(0, rest.find('\n'));
    }
    std::string_view rest_of_line(const YAML::Mark& mark) const { return line_from(offset(mark)); }
    // What is written at a mark, up to the next blank, comma or bracket, in quotes.
    std::string token(const YAML::Mark& mark) const {
        const std::string_view rest = rest_of_line(mark);
        return in_quotes(
            rest.substr(0, std::max<std::size_t>(1, std::min(rest.find_first_of(" \t,[]{}"), rest.size()))));
    }
    // The mark of an empty value is that of whatever follows: the place of its key says more.
    Place key_place_or(const YAML::Mark& mark) const {
        const bool is_value = !stack_.empty() && stack_.back().n_children % 2 == 1;
        if (!is_value || stack_.back().node.keys.empty()) return place(mark);
        return stack_.back().node.keys.back().place;
    }

    void check_properties(const YAML::Mark& mark, const std::string& tag, YAML::anchor_t anchor);
    void check_quote(const YAML::Mark& mark);
    void note_quote(Place place, std::string_view rest) {
        faults_.add(place, fmt::format("the text {} has no closing quote; expected {} at its end",
                                       in_quotes(rest.substr(1)), rest.front()));
    }
    void open(Node::Kind kind, const YAML::Mark& mark, const std::string& tag, YAML::anchor_t anchor,
              YAML::EmitterStyle::value style);
    void close();
    void accept(Node node);
    void accept_key(Open& map, Node node);

    const SourceText& source_;
    FaultList& faults_;
    std::vector<Open> stack_;
    Node root_ = {.kind = Node::Kind::nothing, .place = {1, 1}, .text = {}, .quoted = false, .keys = {}, .items = {}};
    std::size_t n_nodes_ = 0;
    std::size_t n_documents_ = 0;
};

void TreeBuilder::check_properties(const YAML::Mark& mark, const std::string& tag, YAML::anchor_t anchor) {
    if (++n_nodes_ > kMostNodes)
        fail(place(mark),
             fmt::format("the file holds more than {} values; a study file may not be that large", kMostNodes));
    const std::string_view rest = rest_of_line(mark);
    const bool tagged = rest.starts_with('!') || (!tag.empty() && tag != "?" && tag != "!");
    if (tagged)
        faults_.add(place(mark),
                    fmt::format("{} is a tag, which a study file may not hold; expected the plain value", token(mark)));
    if (!tagged && anchor != 0)
        faults_.add(
            place(mark),
            fmt::format("{} is an anchor, which a study file may not hold; expected the plain value", token(mark)));
}

// The YAML library takes a quote that is never closed as closed by the end of the file.
void TreeBuilder::check_quote(const YAML::Mark& mark) {
    const std::string_view rest = rest_of_line(mark);
    if ((rest.starts_with('"') || rest.starts_with('\'')) && !is_quote_closed(source_.text(), offset(mark))) {
        note_quote(place(mark), rest);
        throw Stop();
    }
}

void TreeBuilder::open(Node::Kind kind, const YAML::Mark& mark, const std::string& tag, YAML::anchor_t anchor,
                       YAML::EmitterStyle::value style) {
    check_properties(mark, tag, anchor);
    if (stack_.size() >= kMostDepth)
        fail(place(mark),
             fmt::format("lists and keys are nested more than {} levels deep here; a study needs 7", kMostDepth));
    Open opened;
    opened.node.kind = kind;
    opened.node.place = place(mark);
    opened.in_brackets = style == YAML::EmitterStyle::Flow;
    stack_.push_back(std::move(opened));
}

void TreeBuilder::close() {
    Node node = std::move(stack_.back().node);
    stack_.pop_back();
    accept(std::move(node));
}

void TreeBuilder::accept(Node node) {
    if (stack_.empty()) {
        root_ = std::move(node);
        return;
    }
    Open& parent = stack_.back();
    const bool is_key = parent.node.kind == Node::Kind::map && parent.n_children++ % 2 == 0;
    if (is_key) {
        accept_key(parent, std::move(node));
    } else if (!std::exchange(parent.skips_value, false)) {
        parent.node.items.push_back(std::move(node));
    }
}

void TreeBuilder::accept_key(Open& map, Node node) {
    map.skips_value = true;
    if (node.kind == Node::Kind::nothing && !node.text.empty()) {
        faults_.add(node.place,
                    fmt::format("the key {} means nothing in YAML; expected a name, in quotes if that is the name",
                                in_quotes(node.text)));
    } else if (node.kind == Node::Kind::nothing) {
        faults_.add(node.place, "a key is missing here; expected a name before the colon");
    } else if (node.kind != Node::Kind::text) {
        faults_.add(node.place,
                    "a list or a group of keys stands where a key was expected; expected a name before the colon");
    } else if (node.text == "<<" && !node.quoted) {
        faults_.add(node.place, "\"<<\" is a merge key, which a study file may not hold; expected the keys themselves");
    } else if (const auto [first, is_new] = map.seen.emplace(node.text, node.place); !is_new) {
        faults_.add(node.place, fmt::format("the key {} stands twice, first in line {}; expected it once",
                                            in_quotes(node.text), first->second.line));
    } else {
        map.skips_value = false;
        map.node.keys.push_back(std::move(node));
    }
}

// Tabs, keys that do not fit the lines above them, and colons inside text. True if it was one of them.
bool TreeBuilder::note_indentation(const YAML::ParserException& error) {
    const std::string_view message = error.msg;
    const bool colon = message == YAML::ErrorMsg::MAP_VALUE;
    if (!colon && message != YAML::ErrorMsg::END_OF_MAP && message != YAML::ErrorMsg::TAB_IN_INDENTATION) return false;
    const std::size_t line_index = place(error.mark).line - 1;
    const std::string_view line = source_.line(line_index + 1);
    const std::size_t indent = std::min(line.find_first_not_of(" \t"), line.size());
    const std::size_t tab = line.find('\t');
    if (tab < indent) {
        faults_.add(source_.place(line_index, tab), "a tab indents this line; expected spaces");
        return true;
    }
    if (!colon) return false;
    const std::size_t at = count_from(error.mark.column);
    if (line.substr(0, at).find(": ") != std::string_view::npos) {
        faults_.add(place(error.mark),
                    "a colon followed by a space makes a key here, where none can stand; expected text "
                    "that holds one to stand in quotes");
    } else {
        faults_.add(
            source_.place(line_index, indent),
            fmt::format("the key {} does not fit the lines above it; expected the same indentation as its neighbours, "
                        "and a colon and a space after each key",
                        in_quotes(line.substr(indent, std::max(at, indent) - indent))));
    }
    return true;
}

void TreeBuilder::note(const YAML::ParserException& error) {
    const std::string_view rest = rest_of_line(error.mark);
    const std::string_view message = error.msg;
    if (message.starts_with(YAML::ErrorMsg::UNKNOWN_ANCHOR) && rest.starts_with('*')) {
        try {
            fail_alias(place(error.mark), token(error.mark));
        } catch (const Stop&) {
            return;
        }
    }
    if (const auto quote = find_open_quote(source_.text()); quote && message == YAML::ErrorMsg::EOF_IN_SCALAR) {
        note_quote(source_.place_of_offset(*quote), line_from(*quote));
        return;
    }
    const bool cut_short = offset(error.mark) >= source_.text().find_last_not_of(" \n") ||
                           message == YAML::ErrorMsg::END_OF_SEQ_FLOW || message == YAML::ErrorMsg::END_OF_MAP_FLOW;
    const auto innermost =
        std::find_if(stack_.rbegin(), stack_.rend(), [](const Open& open) { return open.in_brackets; });
    if (cut_short && innermost != stack_.rend()) {
        const bool list = innermost->node.kind == Node::Kind::list;
        faults_.add(innermost->node.place,
                    fmt::format("the bracket \"{}\" is not closed by line {}; expected {} or a comma", list ? '[' : '{',
                                place(error.mark).line, list ? "\"]\"" : "\"}\""));
        return;
    }
    if (note_indentation(error)) return;
    std::string text = syntax_wording(message);
    const bool unknown = message == YAML::ErrorMsg::UNKNOWN_TOKEN;
    if (unknown) text = fmt::format("{} begins with a character that can begin no value", token(error.mark));
    const bool reserved = (unknown || message.starts_with("end of")) && !rest.empty() &&
                          std::string_view("@`%,").find(rest.front()) != std::string_view::npos;
    faults_.add(place(error.mark), std::move(text),
                reserved ? fmt::format("text that begins with {} must stand in quotes", rest.front()) : std::string());
}

}  // namespace

std::optional<Node> read_yaml_tree(const SourceText& source, FaultList& faults) {
    TreeBuilder builder(source, faults);
    try {
        std::istringstream stream(source.text());
        YAML::Parser parser(stream);
        if (parser.HandleNextDocument(builder)) parser.HandleNextDocument(builder);
        return builder.take();
    } catch (const Stop&) {
    } catch (const YAML::ParserException& error) {
        builder.note(error);
    } catch (const YAML::Exception& error) {
        faults.add({1, 1}, fmt::format("this is not YAML: {}", error.what()));
    }
    return std::nullopt;
}

}  // namespace rivalfold
