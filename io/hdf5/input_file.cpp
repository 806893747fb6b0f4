#include "io/hdf5/input_file.hpp"

#include <fmt/format.h>

#include <cmath>
#include <cstring>

#include "io/hdf5/header_check.hpp"

namespace farsum::io::hdf5 {
namespace {

constexpr std::size_t kMostChildren = 100000;
constexpr std::size_t kMostAttributes = 1000;
constexpr std::size_t kMostAttributeElements = 4096;
constexpr std::size_t kMostTextBytes = 1u << 20;

herr_t refuse_external(const char*, const char*, const char*, const char*, unsigned*, hid_t, void*) {
  return -1;
}

Handle make_link_access(bool allow_external) {
  Handle list(H5Pcreate(H5P_LINK_ACCESS), H5Pclose);
  if (!allow_external) H5Pset_elink_cb(list.get(), refuse_external, nullptr);
  return list;
}

Handle open_file(const std::string& path) {
  check_structure(path);
  const Handle access(H5Pcreate(H5P_FILE_ACCESS), H5Pclose);
  H5Pset_fclose_degree(access.get(), H5F_CLOSE_SEMI);
  H5Pset_file_locking(access.get(), true, true);
  Handle file(H5Fopen(path.c_str(), H5F_ACC_RDONLY, access.get()), H5Fclose);
  if (!file)
    fail(ErrorCode::file_damaged, path, {}, "the HDF5 file cannot be opened: damaged, truncated or in use by a writer");
  return file;
}

struct NameList {
  std::vector<std::string> names;
  std::size_t limit;
};

herr_t collect_link(hid_t, const char* name, const H5L_info_t*, void* data) {
  NameList& list = *static_cast<NameList*>(data);
  if (list.names.size() >= list.limit) return -1;
  list.names.emplace_back(name);
  return 0;
}

herr_t collect_attribute(hid_t, const char* name, const H5A_info_t*, void* data) {
  NameList& list = *static_cast<NameList*>(data);
  if (list.names.size() >= list.limit) return 1;
  list.names.emplace_back(name);
  return 0;
}

std::string trimmed(std::string text) {
  text.resize(std::strlen(text.c_str()));
  while (!text.empty() && text.back() == ' ') text.pop_back();
  return text;
}

}  // namespace

bool has_signature(const std::string& path) {
  return H5Fis_hdf5(path.c_str()) > 0;
}

std::string join(const std::string& base, const std::string& name) {
  std::string path;
  const std::string both = base + "/" + name;
  for (std::size_t begin = 0; begin < both.size();) {
    const std::size_t end = std::min(both.find('/', begin), both.size());
    const std::string piece = both.substr(begin, end - begin);
    if (!piece.empty() && piece != ".") path += "/" + piece;
    begin = end + 1;
  }
  return path.empty() ? "/" : path;
}

InputFile::InputFile(const std::string& path, bool allow_external)
    : path_(path), allow_external_(allow_external), link_access_(make_link_access(allow_external)), file_(open_file(path)) {}

void InputFile::refuse_foreign_link(const std::string& prefix) const {
  H5L_info_t info{};
  check(H5Lget_info(id(), prefix.c_str(), &info, link_access()), ErrorCode::file_damaged, path_, prefix, "the link is damaged");
  const bool foreign = info.type != H5L_TYPE_HARD && info.type != H5L_TYPE_SOFT;
  if (foreign && !(allow_external_ && info.type == H5L_TYPE_EXTERNAL)) {
    throw Error(ErrorCode::file_unsafe, "is a link to another file", path_, prefix,
                "copy the data into one file, or allow it with --allow-external");
  }
}

bool InputFile::resolves(const std::string& object) const {
  for (std::size_t end = object.find('/', 1); end != std::string::npos || true; end = object.find('/', end + 1)) {
    const std::string prefix = object.substr(0, end);
    const htri_t there = H5Lexists(id(), prefix.c_str(), link_access());
    if (there < 0) H5Eclear2(H5E_DEFAULT);
    if (there <= 0) return false;
    refuse_foreign_link(prefix);
    if (H5Oexists_by_name(id(), prefix.c_str(), link_access()) <= 0) {
      fail(ErrorCode::file_damaged, path_, prefix, "the link leads nowhere, in a circle or to another file");
    }
    if (end == std::string::npos) return true;
  }
}

Kind InputFile::kind(const std::string& object) const {
  if (object == "/") return Kind::group;
  if (!resolves(object)) return Kind::none;
  const Handle handle = own(H5Oopen(id(), object.c_str(), link_access()), H5Oclose, ErrorCode::file_damaged, path_, object,
                            "the object cannot be opened");
  switch (H5Iget_type(handle.get())) {
    case H5I_GROUP:
      return Kind::group;
    case H5I_DATASET:
      return Kind::dataset;
    default:
      return Kind::other;
  }
}

Handle InputFile::open_object(const std::string& object) const {
  if (object != "/" && !resolves(object)) throw Error(ErrorCode::item_missing, "is not in the file", path_, object, {});
  return own(H5Oopen(id(), object.c_str(), link_access()), H5Oclose, ErrorCode::file_damaged, path_, object,
             "the object cannot be opened");
}

std::vector<std::string> InputFile::children(const std::string& group) const {
  const Handle handle = open_object(group);
  if (H5Iget_type(handle.get()) != H5I_GROUP) throw Error(ErrorCode::item_wrong_type, "is no group", path_, group, {});
  NameList list{{}, kMostChildren};
  hsize_t position = 0;
  const herr_t status = H5Literate(handle.get(), H5_INDEX_NAME, H5_ITER_INC, &position, collect_link, &list);
  check(status, ErrorCode::file_damaged, path_, group, "the group cannot be listed, or has more than 100000 members");
  return std::move(list.names);
}

bool InputFile::has_attribute(const std::string& object, const std::string& name) const {
  const Handle handle = open_object(object);
  return H5Aexists(handle.get(), name.c_str()) > 0;
}

Handle InputFile::open_attribute(hid_t object, const std::string& object_path, const std::string& name) const {
  const htri_t there = H5Aexists(object, name.c_str());
  if (there < 0) fail(ErrorCode::file_damaged, path_, object_path, "the attributes cannot be read");
  if (there == 0) return {};
  return own(H5Aopen(object, name.c_str(), H5P_DEFAULT), H5Aclose, ErrorCode::file_damaged, path_, object_path + "@" + name,
             "the attribute cannot be opened");
}

std::optional<std::vector<double>> InputFile::numbers(const std::string& object, const std::string& name) const {
  const std::string item = object + "@" + name;
  const Handle owner = open_object(object);
  const Handle attribute = open_attribute(owner.get(), object, name);
  if (!attribute) return std::nullopt;
  const Handle type = own(H5Aget_type(attribute.get()), H5Tclose, ErrorCode::file_damaged, path_, item, "the type is damaged");
  const H5T_class_t kind = H5Tget_class(type.get());
  if (kind != H5T_INTEGER && kind != H5T_FLOAT) throw Error(ErrorCode::item_wrong_type, "is no number", path_, item, {});
  const Handle space =
      own(H5Aget_space(attribute.get()), H5Sclose, ErrorCode::file_damaged, path_, item, "the shape is damaged");
  const hssize_t count = H5Sget_simple_extent_npoints(space.get());
  if (count < 1 || static_cast<std::size_t>(count) > kMostAttributeElements) {
    throw Error(ErrorCode::item_wrong_size, fmt::format("has {} elements", count), path_, item, {});
  }
  std::vector<double> values(static_cast<std::size_t>(count));
  check(H5Aread(attribute.get(), H5T_NATIVE_DOUBLE, values.data()), ErrorCode::file_damaged, path_, item,
        "the attribute cannot be read");
  for (const double value : values)
    if (!std::isfinite(value)) throw Error(ErrorCode::item_bad_value, "is not finite", path_, item, {});
  return values;
}

std::optional<double> InputFile::number(const std::string& object, const std::string& name) const {
  const auto values = numbers(object, name);
  if (!values) return std::nullopt;
  if (values->size() != 1) {
    throw Error(ErrorCode::item_wrong_size, fmt::format("has {} elements, one expected", values->size()), path_,
                object + "@" + name, {});
  }
  return values->front();
}

std::optional<std::string> InputFile::text(const std::string& object, const std::string& name) const {
  const std::string item = object + "@" + name;
  const Handle owner = open_object(object);
  const Handle attribute = open_attribute(owner.get(), object, name);
  if (!attribute) return std::nullopt;
  const Handle type = own(H5Aget_type(attribute.get()), H5Tclose, ErrorCode::file_damaged, path_, item, "the type is damaged");
  const Handle space =
      own(H5Aget_space(attribute.get()), H5Sclose, ErrorCode::file_damaged, path_, item, "the shape is damaged");
  if (H5Tget_class(type.get()) != H5T_STRING || H5Sget_simple_extent_npoints(space.get()) != 1) return std::nullopt;
  if (H5Tis_variable_str(type.get()) > 0) {
    char* text = nullptr;
    const Handle memory_type(H5Tget_native_type(type.get(), H5T_DIR_ASCEND), H5Tclose);
    check(H5Aread(attribute.get(), memory_type.get(), &text), ErrorCode::file_damaged, path_, item,
          "the attribute cannot be read");
    const std::string value = text ? std::string(text, strnlen(text, kMostTextBytes)) : std::string();
    H5Dvlen_reclaim(memory_type.get(), space.get(), H5P_DEFAULT, &text);
    return trimmed(value);
  }
  const std::size_t size = H5Tget_size(type.get());
  if (size == 0 || size > kMostTextBytes)
    throw Error(ErrorCode::item_wrong_size, "is a text of unreasonable size", path_, item, {});
  std::string value(size + 1, '\0');
  check(H5Aread(attribute.get(), type.get(), value.data()), ErrorCode::file_damaged, path_, item,
        "the attribute cannot be read");
  return trimmed(std::move(value));
}

std::vector<std::string> InputFile::attribute_names(const std::string& object) const {
  const Handle owner = open_object(object);
  NameList list{{}, kMostAttributes};
  hsize_t position = 0;
  const herr_t status = H5Aiterate2(owner.get(), H5_INDEX_NAME, H5_ITER_INC, &position, collect_attribute, &list);
  check(status, ErrorCode::file_damaged, path_, object, "the attributes cannot be listed");
  return std::move(list.names);
}

}  // namespace farsum::io::hdf5
