using Pipeline.Ingest;
using Pipeline.Quantities;

namespace Pipeline.Configuration;

/// <summary>layouts/NAME.toml to a layout record. To add a format: its name in <see cref="Formats"/> and its reader below.</summary>
static class LayoutReader
{
    static readonly string[] Formats = ["hdf5-matrix", "hdf5-groups", "hdf5-classes", "hdf5-stamps", "csv-wide", "csv-long", "csv-folder", "molecules-csv", "molecules-hdf5"];

    /// <returns>A <see cref="ShotFileLayout"/> or a <see cref="MoleculeFileLayout"/>.</returns>
    public static object Read(TomlTable root, string name)
    {
        object layout = root.Choice("format", Formats) switch
        {
            "hdf5-matrix" => Matrix(root, name),
            "csv-wide" => Wide(root, name),
            "csv-long" => MoreLayouts.Long(root, name),
            "csv-folder" => MoreLayouts.Folder(root, name),
            "hdf5-groups" => MoreLayouts.Groups(root, name),
            "hdf5-classes" => MoreLayouts.Classes(root, name),
            "hdf5-stamps" => MoreLayouts.Stamps(root, name),
            "molecules-csv" => Molecules(root, name, null),
            _ => Molecules(root, name, root.Text("group")),
        };
        root.RefuseUnknown();
        return layout;
    }

    static Hdf5MatrixLayout Matrix(TomlTable root, string name)
    {
        TomlTable samples = root.Table("samples");
        var layout = new Hdf5MatrixLayout
        {
            Name = name, Samples = samples.Text("dataset"), Meaning = MeaningOf(samples), Start = TimeOf(samples, "start"), Step = TimeOf(samples, "step"),
            Scale = FactorOf(samples, "scale", 1), Offset = FactorOf(samples, "offset", 0), ExternalLinks = ExternalLinks(root), LowestCode = CodeOf(samples, "lowest_code"),
            HighestCode = CodeOf(samples, "highest_code"), Channel = samples.Has("channel") ? samples.Whole("channel", 0, 1000) : null,
            Written = samples.Has("written") ? FactorOf(samples, "written", 0) : null, Shots = ShotColumnsReader.Read(root),
        };
        samples.RefuseUnknown();
        return layout;
    }

    internal static bool ExternalLinks(TomlTable root) => root.Has("external_links") && root.Flag("external_links");

    static WideCsvLayout Wide(TomlTable root, string name)
    {
        TomlTable samples = root.Table("samples"), shots = root.Table("shots"), time = samples.Table("time");
        string shotTable = ShotColumnsReader.TableName(shots);
        var layout = new WideCsvLayout
        {
            Name = name, Dialect = Dialect(root), Meaning = MeaningOf(samples), TimeColumn = time.Text("column"),
            TimeFactor = UnitOf(time, Dimension.Time), ShotColumn = samples.Text("shot"), ShotTable = shotTable,
            Scale = samples.Has("scale") ? samples.Number("scale") : 1, Offset = samples.Has("offset") ? samples.Number("offset") : 0,
            LowestCode = CodeOf(samples, "lowest_code"), HighestCode = CodeOf(samples, "highest_code"), Shots = ShotColumnsReader.Read(root),
        };
        if (!layout.ShotColumn.Contains("{number}", StringComparison.Ordinal)) throw samples.Refuse("shot", $"\"{layout.ShotColumn}\"", "a column name with {number} in it");
        time.RefuseUnknown();
        samples.RefuseUnknown();
        return layout;
    }

    static MoleculeFileLayout Molecules(TomlTable root, string name, string? group)
    {
        TomlTable c = root.Table("columns");
        var layout = new MoleculeFileLayout
        {
            Name = name, Group = group, Dialect = group is null ? Dialect(root) : new CsvDialect(), Time = c.Text("time"), Z = c.Text("z"), Vz = c.Text("vz"),
            X = c.OptionalText("x"), Y = c.OptionalText("y"), Vx = c.OptionalText("vx"), Vy = c.OptionalText("vy"), Weight = c.Text("weight"),
        };
        c.RefuseUnknown();
        return layout;
    }

    /// <summary>[table]: separator, comment, decimal, encoding, skip_lines.</summary>
    internal static CsvDialect Dialect(TomlTable root)
    {
        TomlTable? table = root.OptionalTable("table");
        if (table is null) return new CsvDialect();
        char One(string key, char otherwise)
        {
            if (!table.Has(key)) return otherwise;
            string text = table.Text(key);
            return text == "tab" ? '\t' : text.Length == 1 ? text[0] : throw table.Refuse(key, $"\"{text}\"", "one character, or \"tab\"");
        }
        var dialect = new CsvDialect(One("separator", ','), One("comment", '#'),
            table.Has("decimal") ? table.Choice("decimal", ("point", '.'), ("comma", ',')) : '.',
            table.Has("encoding") && table.Choice("encoding", ("utf-8", false), ("latin-1", true)),
            table.Has("skip_lines") ? table.Whole("skip_lines", 0, 10_000) : 0);
        if (dialect.Decimal == dialect.Separator) throw table.Refuse("decimal", "the separator of fields", "another character");
        table.RefuseUnknown();
        return dialect;
    }

    internal static SampleMeaning MeaningOf(TomlTable samples) =>
        samples.Choice("refers_to", ("bin start", SampleMeaning.BinStart), ("instant", SampleMeaning.Instant));

    internal static int? CodeOf(TomlTable samples, string key) => samples.Has(key) ? samples.Whole(key, int.MinValue, int.MaxValue) : null;

    internal static double UnitOf(TomlTable t, Dimension dimension)
    {
        string unit = t.Text("unit");
        return UnitTable.TryFind(dimension, unit, out double factor) ? factor : throw t.Refuse("unit", $"\"{unit}\"", $"one of {UnitTable.Accepted(dimension)}");
    }

    static StatedOrStored TimeOf(TomlTable samples, string key)
    {
        if (!samples.IsTable(key)) return new StatedOrStored(samples.Quantity(key, Dimension.Time).Value, null);
        TomlTable stored = samples.Table(key);
        var at = new StatedOrStored(null, stored.Text("attribute"), UnitOf(stored, Dimension.Time));
        stored.RefuseUnknown();
        return at;
    }

    static StatedOrStored FactorOf(TomlTable samples, string key, double otherwise)
    {
        if (!samples.Has(key)) return new StatedOrStored(otherwise, null);
        if (!samples.IsTable(key)) return new StatedOrStored(samples.Number(key), null);
        TomlTable stored = samples.Table(key);
        var at = new StatedOrStored(null, stored.Text("attribute"));
        stored.RefuseUnknown();
        return at;
    }
}
