using Pipeline.Apparatus;
using Pipeline.Configuration;
using Pipeline.Hdf5;
using Pipeline.Ingest;
using Pipeline.Reduction;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Ingest;

/// <summary>The same shots with their housekeeping kept in every place that a layout can name, written by h5py.</summary>
public sealed class HousekeepingTests : IDisposable
{
    readonly string _folder = Directory.CreateTempSubdirectory("arrivals-house").FullName;

    public void Dispose() => Directory.Delete(_folder, recursive: true);

    const string File = """
        n = 8
        a = (np.arange(n*40).reshape(n, 40) % 7).astype('i2')
        f['x'] = a
        f['pair'] = np.stack([a, a + 100], axis=1)
        kind = np.array([b'signal', b'no_ablation', b'probe_blocked', b'dark'] * 2)
        on = np.array([True] * 4 + [False] * 4)
        probe = np.array([1, 1, 0, 0] * 2) * 1.5
        s = f.create_group('s')
        s['number'] = np.arange(10, 10 + n); s['kind'] = kind; s['on'] = on; s['probe'] = probe
        s['lit'] = np.array([True, True, False, False] * 2); s['fired'] = np.array(['yes', 'no'] * 4, dtype=h5py.string_dtype())
        t = np.zeros(n, [('number', 'i8'), ('kind', 'S14'), ('on', '?'), ('probe', 'f4')])
        t['number'] = np.arange(10, 10 + n); t['kind'] = kind; t['on'] = on; t['probe'] = probe
        f['table'] = t
        x = f['x'].attrs
        x['number'] = np.arange(10, 10 + n); x['kind'] = kind; x['on'] = on; x['probe'] = probe; x['written'] = 5; x['every'] = 'signal'
        """;

    const string Csv = "number;kind;on;probe\n10;signal;TRUE;1,5\n11;no_ablation;TRUE;1,5\n12;probe_blocked;TRUE;0\n13;dark;TRUE;0\n14;signal;FALSE;1,5\n15;no_ablation;FALSE;1,5\n16;probe_blocked;FALSE;0\n17;dark;FALSE;0\n";

    const string Samples = "format = \"hdf5-matrix\"\n[samples]\ndataset = \"x\"\nstart = \"-0.1 ms\"\nstep = \"10 us\"\nrefers_to = \"bin start\"\n";
    const string Kinds = "[kinds]\nsignal = \"signal\"\nno_ablation = \"no_ablation\"\nprobe_blocked = \"probe_blocked\"\ndark = \"dark\"\n[conditions]\nTRUE = \"on\"\nFALSE = \"off\"\n";

    public static TheoryData<string, Hdf5Reader> Places()
    {
        var rows = new TheoryData<string, Hdf5Reader>();
        foreach (Hdf5Reader reader in (Hdf5Reader[])[Hdf5Reader.Library, Hdf5Reader.Managed])
            foreach (string shots in (string[])
            [
                Kinds + "[shots]\nnumber = \"s/number\"\nkind = \"s/kind\"\ncondition = \"s/on\"\nprobe_monitor = \"s/probe\"\n",
                Kinds + "[shots]\ntable = \"table\"\nnumber = \"number\"\nkind = \"kind\"\ncondition = \"on\"\nprobe_monitor = \"probe\"\n",
                Kinds + "[shots]\nattributes_of = \"x\"\nnumber = \"number\"\nkind = \"kind\"\ncondition = \"on\"\nprobe_monitor = \"probe\"\n",
                Kinds + "[table]\nseparator = \";\"\ndecimal = \"comma\"\n[shots]\nfile = \"{run}_shots.csv\"\nnumber = \"number\"\nkind = \"kind\"\ncondition = \"on\"\nprobe_monitor = \"probe\"\n",
                "[conditions]\nTRUE = \"on\"\nFALSE = \"off\"\n[shots]\nnumber = \"s/number\"\nprobe_on = \"s/lit\"\nablation_on = \"s/fired\"\ncondition = \"s/on\"\nprobe_monitor = \"s/probe\"\n",
            ]) rows.Add(shots, reader);
        return rows;
    }

    [SkippableTheory]
    [MemberData(nameof(Places))]
    public void Open_HousekeepingInAnyPlace_GivesTheSameShots(string shots, Hdf5Reader reader)
    {
        using IShotSource source = Open(Samples + shots, reader);
        Assert.Equal(Enumerable.Range(10, 8).Select(n => (long)n), source.Shots.Select(s => s.Number));
        Assert.Equal([ShotKind.Signal, ShotKind.NoAblation, ShotKind.ProbeBlocked, ShotKind.Dark, ShotKind.Signal, ShotKind.NoAblation, ShotKind.ProbeBlocked, ShotKind.Dark], source.Shots.Select(s => s.Kind));
        Assert.Equal(["on", "on", "on", "on", "off", "off", "off", "off"], source.Shots.Select(s => s.Condition));
        Assert.Equal([1.5, 1.5, 0, 0, 1.5, 1.5, 0, 0], source.Shots.Select(s => s.ProbeMonitor));
        Assert.Equal(Enumerable.Range(0, 320).Select(k => k % 7), source.ReadBlocks().Single().Codes!);
    }

    [SkippableFact]
    public void Open_OneAttributeForAll_HoldsForEveryShot()
    {
        using IShotSource source = Open(Samples + "[shots]\nattributes_of = \"x\"\nkind = \"every\"\nonly_condition = \"off\"\n" + Kinds);
        Assert.All(source.Shots, s => Assert.Equal((ShotKind.Signal, "off"), (s.Kind, s.Condition)));
    }

    [SkippableTheory]
    [InlineData(0)]
    [InlineData(1)]
    public void Open_Channel_GivesItsSamples(int channel)
    {
        using IShotSource source = Open(Samples.Replace("\"x\"", $"\"pair\"\nchannel = {channel}", StringComparison.Ordinal) + "[shots]\nkind = \"s/kind\"\nonly_condition = \"off\"\n" + Kinds);
        Assert.Equal((8, 40), (source.Shape.Shots, source.Shape.Samples));
        Assert.Equal(Enumerable.Range(0, 320).Select(k => k % 7 + 100 * channel), source.ReadBlocks().Single().Codes!);
    }

    [SkippableTheory]
    [InlineData("dataset = \"pair\"\n", "three", "3 dimensions", "channel")]
    [InlineData("dataset = \"pair\"\nchannel = 2\n", "a channel 2", "channels 0 to 1", "channel")]
    [InlineData("dataset = \"x\"\nwritten = { attribute = \"number\" }\n", "one", "8 values", "attribute")]
    [InlineData("dataset = \"x\"\nwritten = 9\n", "from 1 to 8", "9", "written")]
    public void Open_WrongSamples_SaysWhat(string samples, string expected, string found, string remedy)
    {
        Fault fault = Assert.Throws<DataFaultException>(() => Open(Samples.Replace("dataset = \"x\"\n", samples, StringComparison.Ordinal) + "[shots]\nkind = \"s/kind\"\nonly_condition = \"off\"\n" + Kinds)).Fault;
        Assert.Contains(found, fault.Found, StringComparison.Ordinal);
        Assert.Contains(remedy, fault.Remedy, StringComparison.Ordinal);
        if (expected != "three") Assert.Contains(expected, fault.Expected, StringComparison.Ordinal);
    }

    /// <summary>The acquisition made room for eight shots and was stopped after five.</summary>
    [SkippableFact]
    public void Open_PartlyWritten_GivesWhatWasWritten()
    {
        using (IShotSource source = Open(Samples.Replace("\"x\"", "\"x\"\nwritten = { attribute = \"written\" }", StringComparison.Ordinal) + "[shots]\nkind = \"s/kind\"\nonly_condition = \"off\"\n" + Kinds))
        {
            Assert.Equal((5, 3), (source.Shots.Count, source.Shape.Unfilled));
            Assert.Equal(200, source.ReadBlocks().Sum(b => b.Codes!.Length));
        }
        Python.Write(Path.Combine(_folder, "run.h5"), "k = f['s/kind'][...]; k[6:] = b''; f['s/kind'][...] = k", "a");
        using IShotSource half = ShotFiles.Open(Path.Combine(_folder, "run.h5"), Layout(Samples + "[shots]\nkind = \"s/kind\"\nonly_condition = \"off\"\n" + Kinds), DetectorKind.Counting);
        Assert.Equal((6, 2), (half.Shots.Count, half.Shape.Unfilled));
        BinnedRun run = Reducer.Reduce(half.Shape, half.Shots, half.ReadBlocks(), new Detector { Kind = DetectorKind.Counting, Efficiency = new(1) }, new ReductionSettings());
        Assert.Contains(run.Remarks, r => r.StartsWith("2 places at the end", StringComparison.Ordinal));
    }

    /// <summary>After a restart the acquisition wrote two shots again.</summary>
    [SkippableFact]
    public void Reduce_RepeatedShots_AreCutAndListed()
    {
        Open(Samples + "[shots]\nnumber = \"s/number\"\nkind = \"s/kind\"\nonly_condition = \"off\"\n" + Kinds).Dispose();
        Python.Write(Path.Combine(_folder, "run.h5"), "f['s/number'][...] = [10, 11, 12, 13, 12, 13, 14, 15]", "a");
        using IShotSource source = ShotFiles.Open(Path.Combine(_folder, "run.h5"), Layout(Samples + "[shots]\nnumber = \"s/number\"\nkind = \"s/kind\"\nonly_condition = \"off\"\n" + Kinds), DetectorKind.Counting);
        BinnedRun run = Reducer.Reduce(source.Shape, source.Shots, source.ReadBlocks(), new Detector { Kind = DetectorKind.Counting, Efficiency = new(1) }, new ReductionSettings());
        Assert.Equal([12L, 13], run.Cuts.Single(c => c.Reason == "repeated shot").Numbers);
        Assert.Equal(6, run.Groups.Sum(g => g.Shots));
    }

    [Theory]
    [InlineData("[shots]\nkind = \"a\"\nprobe_on = \"b\"\nonly_condition = \"off\"\n", "kind beside")]
    [InlineData("[shots]\nprobe_on = \"b\"\nonly_condition = \"off\"\n", "neither kind")]
    [InlineData("[shots]\ntable = \"t\"\nattributes_of = \"b\"\nkind = \"k\"\nonly_condition = \"off\"\n", "table and attributes_of")]
    [InlineData("[shots]\nfile = \"../s.csv\"\nkind = \"k\"\nonly_condition = \"off\"\n", "../s.csv")]
    public void Layout_Contradicting_SaysWhat(string shots, string found) =>
        Assert.Contains(found, Assert.Throws<DataFaultException>(() => Layout(Samples + shots + Kinds)).Fault.Found, StringComparison.Ordinal);

    [SkippableFact]
    public void Open_LabelThatIsNoTruth_SaysWhich()
    {
        Fault fault = Assert.Throws<DataFaultException>(() => Open(Samples + "[shots]\nprobe_on = \"s/kind\"\nablation_on = \"s/fired\"\nonly_condition = \"off\"\n")).Fault;
        Assert.Contains("signal", fault.Found, StringComparison.Ordinal);
        Assert.Contains("s/kind, shot 0", fault.Where, StringComparison.Ordinal);
    }

    /// <summary>What peek proposes for files of other labs, unedited, reads them.</summary>
    [SkippableTheory]
    [InlineData("f.create_dataset('data', data=a)\nf['data'].attrs['t_start_us'] = -100.0; f['data'].attrs['dt_us'] = 10.0\nf['table'] = t", "table = \"table\"", null)]
    [InlineData("f.create_dataset('data', data=a)\nx = f['data'].attrs\nx['t_start_s'] = -1e-4; x['dt_s'] = 1e-5\nx['probe_on'] = lit; x['ablation_on'] = fired", "attributes_of = \"data\"", null)]
    [InlineData("f.create_dataset('data', data=a)\nx = f['data'].attrs\nx['t_start_s'] = -1e-4; x['dt_s'] = 1e-5\nf['h/probe_on'] = lit; f['h/ablation_fired'] = fired; f['h/decelerator'] = lit", "probe_on = \"h/probe_on\"", null)]
    [InlineData("f.create_dataset('data', data=np.stack([a, a], axis=1))\nf['data'].attrs['t_start_us'] = -100.0; f['data'].attrs['dt_us'] = 10.0\nf['table'] = t", "channel = 0", "which of the channels 0 to 1")]
    public void Peek_OtherPlaces_AreProposed(string write, string proposed, string? question)
    {
        string path = Path.Combine(_folder, "other.h5");
        Python.Write(path, "n = 8\na = (np.arange(n*40).reshape(n, 40) % 7).astype('i2')\nlit = np.array([True, True, False, False] * 2); fired = np.array([True, False] * 4)\n"
            + "t = np.zeros(n, [('shot', 'i8'), ('kind', 'S14'), ('condition', '?'), ('probe_power', 'f4')])\nt['shot'] = np.arange(n); t['kind'] = [b'signal', b'no_ablation', b'probe_blocked', b'dark'] * 2; t['condition'] = True\n" + write);
        Proposal proposal = FileSketches.Of(path).Proposal!;
        Assert.Contains(proposed, proposal.Toml, StringComparison.Ordinal);
        if (question is null) Assert.Null(proposal.Question);
        else Assert.Contains(question, proposal.Question, StringComparison.Ordinal);
        using IShotSource source = ShotFiles.Open(path, Layout(proposal.Toml), DetectorKind.Counting);
        Assert.Equal((-1e-4, 1e-5, 40), (source.Shape.OriginSeconds, source.Shape.TickSeconds, source.Shape.Samples));
        Assert.Equal([0, 1, 2, 3, 0, 1, 2, 3], source.Shots.Select(s => (int)s.Kind));
        Assert.Equal(Enumerable.Range(0, 320).Select(k => k % 7), source.ReadBlocks().Single().Codes!);
        if (proposed.StartsWith("table", StringComparison.Ordinal)) Assert.All(source.Shots, s => Assert.Equal("on", s.Condition));
    }

    static ShotFileLayout Layout(string toml) => LayoutText.Read(toml, "l");

    IShotSource Open(string toml, Hdf5Reader reader = Hdf5Reader.Best)
    {
        Skip.If(reader == Hdf5Reader.Library && !Hdf5Files.HasLibrary, "no HDF5 C library on this machine");
        string path = Path.Combine(_folder, "run.h5");
        Python.Write(path, File);
        System.IO.File.WriteAllText(Path.Combine(_folder, "run_shots.csv"), Csv);
        return ShotFiles.Open(path, Layout(toml), DetectorKind.Counting, new Hdf5Access(reader));
    }
}
