using Pipeline.Ingest;
using Pipeline.Quantities;

namespace Pipeline.Configuration;

/// <summary>Readers of the layouts beyond the two plain ones; see <see cref="LayoutReader"/>.</summary>
static class MoreLayouts
{
    public static LongCsvLayout Long(TomlTable root, string name)
    {
        TomlTable samples = root.Table("samples"), shots = root.Table("shots"), time = samples.Table("time");
        var layout = new LongCsvLayout
        {
            Name = name, Dialect = LayoutReader.Dialect(root), Meaning = LayoutReader.MeaningOf(samples), Axis = Axis(samples), ShotColumn = samples.Text("shot"),
            TimeColumn = time.Text("column"), TimeFactor = LayoutReader.UnitOf(time, Dimension.Time), ValueColumn = samples.Text("value"), ShotTable = ShotColumnsReader.TableName(shots),
            Shots = ShotColumnsReader.Read(root),
        };
        time.RefuseUnknown();
        samples.RefuseUnknown();
        return layout;
    }

    public static CsvFolderLayout Folder(TomlTable root, string name)
    {
        TomlTable samples = root.Table("samples"), shots = root.Table("shots"), time = samples.Table("time");
        var layout = new CsvFolderLayout
        {
            Name = name, Dialect = LayoutReader.Dialect(root), Meaning = LayoutReader.MeaningOf(samples), TimeColumn = time.Text("column"),
            TimeFactor = LayoutReader.UnitOf(time, Dimension.Time), ValueColumn = samples.Text("value"), ShotTable = ShotColumnsReader.TableName(shots), FileColumn = shots.Text("trace"),
            LowestCode = LayoutReader.CodeOf(samples, "lowest_code"), HighestCode = LayoutReader.CodeOf(samples, "highest_code"), Shots = ShotColumnsReader.Read(root),
        };
        time.RefuseUnknown();
        samples.RefuseUnknown();
        return layout;
    }

    public static Hdf5StampsLayout Stamps(TomlTable root, string name)
    {
        TomlTable samples = root.Table("samples"), times = samples.Table("times");
        var layout = new Hdf5StampsLayout
        {
            Name = name, ExternalLinks = LayoutReader.ExternalLinks(root), Meaning = SampleMeaning.BinStart, Axis = Axis(samples), Times = times.Text("dataset"), TimeFactor = LayoutReader.UnitOf(times, Dimension.Time),
            ShotIndex = samples.Text("shot_index"), Shots = ShotColumnsReader.Read(root),
        };
        times.RefuseUnknown();
        samples.RefuseUnknown();
        return layout;
    }

    public static Hdf5GroupsLayout Groups(TomlTable root, string name)
    {
        TomlTable samples = root.Table("samples");
        var layout = new Hdf5GroupsLayout
        {
            Name = name, ExternalLinks = LayoutReader.ExternalLinks(root), Meaning = LayoutReader.MeaningOf(samples), Axis = Axis(samples), Groups = samples.Text("groups"), Samples = samples.Text("dataset"),
            LowestCode = LayoutReader.CodeOf(samples, "lowest_code"), HighestCode = LayoutReader.CodeOf(samples, "highest_code"),
            Shots = ShotColumnsReader.Read(root),
        };
        samples.RefuseUnknown();
        return layout;
    }

    public static Hdf5ClassesLayout Classes(TomlTable root, string name)
    {
        TomlTable samples = root.Table("samples"), times = samples.Table("times");
        var layout = new Hdf5ClassesLayout
        {
            Name = name, ExternalLinks = LayoutReader.ExternalLinks(root), Meaning = LayoutReader.MeaningOf(samples), Groups = samples.Text("groups"), Samples = samples.Text("dataset"), Times = times.Text("dataset"),
            TimeFactor = LayoutReader.UnitOf(times, Dimension.Time), Shots = ShotColumnsReader.Read(root),
        };
        if (!layout.Groups.Contains("{kind}", StringComparison.Ordinal)) throw samples.Refuse("groups", $"\"{layout.Groups}\"", "a group name with {kind} in it");
        times.RefuseUnknown();
        samples.RefuseUnknown();
        return layout;
    }

    static StatedAxis Axis(TomlTable samples)
    {
        double start = samples.Quantity("start", Dimension.Time).Value, step = samples.Quantity("step", Dimension.Time).Value;
        if (!(step > 0)) throw samples.Refuse("step", $"{step:G6} s", "a positive time");
        return new StatedAxis(start, step, samples.Whole("samples", 2, 100_000_000));
    }
}
