#include "rivalfold/study/read_study.hpp"

#include "study/sections.hpp"
#include "study/values.hpp"

#include <fmt/format.h>
#include <array>
#include <cerrno>
#include <filesystem>
#include <fstream>
#include <system_error>
#include <utility>

namespace rivalfold {
namespace {

Study read_sections(const Node& root, const std::string& path, FaultList& faults) {
    Study study;
    const Keys keys(root, root.place.line > 0 ? root.place : Place{1, 1}, "", kStudyKeys, faults);
    if (const Node* title = keys.value("study"))
        study.title = read_prose(*title, keys.label("study"), "a title", faults).value_or("");
    if (const Node* data = keys.value("data")) study.data = read_data(*data, keys.place("data"), path, faults);
    if (const Node* constructs = keys.value("constructs")) study.constructs = read_constructs(*constructs, "", faults);
    if (const Node* target = keys.value("target"))
        study.target = read_name(*target, keys.label("target"), "a construct name", faults).value_or(Name{});
    if (const Node* controls = keys.value("controls"); controls != nullptr)
        study.controls = read_names(*controls, keys.label("controls"), "construct names", faults, 0);
    if (const Node* metric = keys.value("metric"))
        read_word(*metric, keys.label("metric"), std::array{Metric::standard, Metric::response}, study.metric, faults);
    if (const Node* theories = keys.value("theories")) study.theories = read_theories(*theories, faults);
    if (const Node* trial = keys.value("trial")) study.trial = read_trial(*trial, keys.place("trial"), path, faults);
    if (const Node* verdict = keys.value("verdict"))
        study.verdict = read_verdict(*verdict, keys.place("verdict"), faults);
    return study;
}

[[noreturn]] void fail(const std::string& path, std::string message) {
    throw FaultError(Fault{path, {}, {}, std::move(message), {}, {}});
}

}  // namespace

Study read_study_text(std::string_view text, const std::string& path) {
    if (auto faults = check_encoding(text, path); !faults.empty()) throw FaultError(std::move(faults));
    const SourceText source(text);
    FaultList faults(source, path);
    const std::optional<Node> root = read_yaml_tree(source, faults);
    if (!root) faults.throw_if_any();
    Study study = read_sections(*root, path, faults);
    check_study(study, faults);
    faults.throw_if_any();
    study.path = path;
    study.source = text;
    return study;
}

Study read_study(const std::string& path) {
    std::error_code error;
    const auto status = std::filesystem::status(path, error);
    if (status.type() == std::filesystem::file_type::not_found)
        fail(path, "there is no such file; expected a study file");
    if (status.type() == std::filesystem::file_type::directory) fail(path, "this is a folder; expected a study file");
    std::ifstream file(path, std::ios::binary);
    if (!file) fail(path, fmt::format("the file cannot be opened: {}", std::generic_category().message(errno)));
    std::string text(kMostBytes + 1, '\0');
    file.read(text.data(), static_cast<std::streamsize>(text.size()));
    if (file.bad()) fail(path, "the file cannot be read to its end");
    text.resize(static_cast<std::size_t>(file.gcount()));
    if (text.size() > kMostBytes) {
        const auto size = std::filesystem::file_size(path, error);
        fail(path, fmt::format("the file has {} bytes; a study file may have at most {} (4 MiB)",
                               error ? text.size() : size, kMostBytes));
    }
    return read_study_text(text, path);
}

}  // namespace rivalfold
