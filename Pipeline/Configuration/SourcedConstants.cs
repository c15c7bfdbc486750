using Pipeline.Quantities;

namespace Pipeline.Configuration;

/// <summary>Constants of a table, each with the place where it was published.</summary>
/// <param name="table">Where they stand.</param>
/// <param name="sources">Published source of each constant, by its path; added to.</param>
sealed class SourcedConstants(TomlTable table, Dictionary<string, string> sources)
{
    public Measured Required(string key, Dimension dimension)
    {
        if (!table.IsTable(key)) throw table.Refuse(key, table.Has(key) ? "a value without source" : "no such key", $"{key} = {{ value = \"...\", source = \"...\" }}", "name where the constant was published");
        TomlTable constant = table.Table(key);
        Measured value = constant.Quantity("value", dimension);
        string source = constant.Text("source");
        constant.RefuseUnknown();
        if (string.IsNullOrWhiteSpace(source)) throw constant.Refuse("source", "an empty source", "where the constant was published", "name it");
        sources[table.PathOf(key)] = source;
        return value;
    }

    public Measured? Optional(string key, Dimension dimension) => table.Has(key) ? Required(key, dimension) : null;
}
