using Pipeline.Hdf5;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Hdf5;

/// <summary>Legal files that the managed library misreads or falls over: refused by the managed reader, read by the C library.</summary>
public sealed class HazardTests : IDisposable
{
    readonly string _folder = Directory.CreateTempSubdirectory("arrivals-hazard").FullName;
    string FilePath => Path.Combine(_folder, "t.h5");

    public void Dispose() => Directory.Delete(_folder, recursive: true);

    [SkippableTheory]
    [InlineData("earliest", 3)]
    [InlineData("latest", 3)]
    [InlineData("latest", 40)]
    public void SoftLinks_AreFollowedByTheLibraryAndRefusedElse(string version, int links)
    {
        Python.Write(FilePath, $"for k in range({links}): f['g%d' % k] = [k, 2]\nf['in/side'] = h5py.SoftLink('/g1')\nf['in/near'] = h5py.SoftLink('side')\nf['loop'] = h5py.SoftLink('/pool')\nf['pool'] = h5py.SoftLink('/loop')\nf['gone'] = h5py.SoftLink('/nothing')\nf['far/text'] = ['a', 'b']\nf['far'].attrs['who'] = 'me'\nf['far/name'] = h5py.SoftLink('/far/text')",
            options: $", libver='{version}'");
        Assert.Contains("links to other places", Managed().Found, StringComparison.Ordinal);
        using IHdf5File file = Library();
        Assert.Equal([1.0, 2.0], file.ReadNumbers("in/side"));
        Assert.Equal([1.0, 2.0], file.ReadNumbers("in/near"));
        Assert.Equal(["a", "b"], file.ReadLabels("far/name"));
        Assert.Equal("me", file.ReadTextAttribute("far", "who"));
        Assert.Contains("links on the way", Assert.ThrowsAny<DataFaultException>(() => file.ReadNumbers("loop")).Fault.Found, StringComparison.Ordinal);
        Assert.Contains("no such dataset", Assert.ThrowsAny<DataFaultException>(() => file.ReadNumbers("gone")).Fault.Found, StringComparison.Ordinal);
        Assert.Contains(file.Describe(200), n => n is { Path: "loop", Dimensions: null });
    }

    [SkippableTheory]
    [InlineData("earliest", "h5py.ExternalLink('other.h5', '/x')")]
    [InlineData("latest", "h5py.ExternalLink('other.h5', '/x')")]
    [InlineData("latest", "h5py.ExternalLink('../../../../../../etc/hostname', '/x')")]
    public void ExternalLinks_AreRefusedUnlessAllowed(string version, string link)
    {
        Python.Write(Path.Combine(_folder, "other.h5"), "f['x'] = [3, 4]");
        Python.Write(FilePath, $"f['g'] = [1]\nf['x'] = {link}", options: $", libver='{version}'");
        Assert.Contains("links to other places", Managed().Found, StringComparison.Ordinal);
        using (IHdf5File file = Library())
            Assert.Contains("a link into another file", Assert.ThrowsAny<DataFaultException>(() => file.ReadNumbers("x")).Fault.Found, StringComparison.Ordinal);
        using IHdf5File allowed = Hdf5Files.Open(FilePath, new Hdf5Access(Hdf5Reader.Library, ExternalLinks: true));
        if (link.Contains("..", StringComparison.Ordinal)) Assert.ThrowsAny<DataFaultException>(() => allowed.ReadNumbers("x"));
        else Assert.Equal([3.0, 4.0], allowed.ReadNumbers("x"));
    }

    [SkippableFact]
    public void DataInOtherFiles_IsRefusedUnlessAllowed()
    {
        File.WriteAllBytes(Path.Combine(_folder, "raw.bin"), new byte[80]);
        Python.Write(FilePath, $"f.create_dataset('raw', (10,), 'f8', external=[(r'{_folder}/raw.bin', 0, 80)])\nf['own'] = [1.0, 2]\n"
            + "v = h5py.VirtualLayout((2,), 'f8')\nv[:] = h5py.VirtualSource(path, 'own', (2,))\nf.create_virtual_dataset('virtual', v)");
        foreach (string name in (string[])["raw", "virtual"])
        {
            using IHdf5File file = Library();
            Assert.Contains("other file", Assert.ThrowsAny<DataFaultException>(() => file.Shape(name)).Fault.Found.Replace("another", "other", StringComparison.Ordinal), StringComparison.Ordinal);
        }
        using (IHdf5File allowed = Hdf5Files.Open(FilePath, new Hdf5Access(Hdf5Reader.Library, ExternalLinks: true))) Assert.Equal([0.0, 0], allowed.ReadNumbers("raw")[..2]);
        Assert.Contains("links to other places", Managed().Found, StringComparison.Ordinal);
        Python.Write(FilePath, "del f['raw']\nf.copy('virtual', h5py.File(path + '2', 'w'))", "a");
        using IHdf5File managed = Hdf5Files.Open(FilePath + "2", new Hdf5Access(Hdf5Reader.Managed));
        Assert.Contains("a virtual dataset", Assert.ThrowsAny<DataFaultException>(() => managed.Shape("virtual")).Fault.Found, StringComparison.Ordinal);
    }

    /// <summary>A number of 12 bits at bit 4 of four bytes.</summary>
    [SkippableTheory]
    [InlineData("earliest")]
    [InlineData("latest")]
    public void PartialIntegers_AreConvertedByTheLibraryAndRefusedElse(string version)
    {
        Python.Write(FilePath, "t = h5py.h5t.STD_I32LE.copy(); t.set_precision(12); t.set_offset(4)\nd = h5py.h5d.create(f.id, b'x', t, h5py.h5s.create_simple((4,)))\n"
            + "d.write(h5py.h5s.ALL, h5py.h5s.ALL, np.array([1, 2, 3, -4], 'i4'))", options: $", libver='{version}'");
        Assert.Contains("part of their bytes", Managed().Found, StringComparison.Ordinal);
        using IHdf5File file = Library();
        Assert.Equal([1.0, 2, 3, -4], file.ReadNumbers("x"));
    }

    /// <summary>Chunk 1 is stored deflated but not shuffled; each index of chunks keeps the mask that says so in another place.</summary>
    [SkippableTheory]
    [InlineData("earliest", "(4, 100)", "(2, 100)")]
    [InlineData("latest", "(4, 100)", "(2, 100)")]
    [InlineData("latest", "(40, 100)", "(2, 100)")]
    [InlineData("latest", "(4, 100)", "(4, 100)")]
    [InlineData("latest", "(4, 100), maxshape=(None, 100)", "(2, 100)")]
    [InlineData("latest", "(40, 100), maxshape=(None, 100)", "(2, 100)")]
    public void SkippedFilters_AreHonouredByTheLibraryAndRefusedElse(string version, string shape, string chunk)
    {
        Python.Write(FilePath, $$"""
            import zlib
            d = f.create_dataset('x', {{shape}}, dtype='i2', chunks={{chunk}}, compression='gzip', shuffle=True)
            a = (np.arange(d.size) % 311).astype('i2').reshape(d.shape)
            d[...] = a
            n = d.chunks[0]
            last = d.shape[0] - n
            d.id.write_direct_chunk((last, 0), zlib.compress(a[last:last + n].tobytes()), filter_mask=1)
            """, options: $", libver='{version}'");
        Assert.Contains("without one of their filters", Managed().Found, StringComparison.Ordinal);
        using IHdf5File file = Library();
        int rows = (int)file.Shape("x").Dimensions[0];
        Assert.Equal(Enumerable.Range(0, rows * 100).Select(k => k % 311), file.ReadIntegers("x", 0, rows));
    }

    /// <summary>Noise that deflate and LZF cannot shrink is stored as it is, with the mask set: real data do this.</summary>
    [SkippableTheory]
    [InlineData("gzip")]
    [InlineData("lzf")]
    public void Noise_ThatCannotBeCompressed_IsReadOrRefused(string filter)
    {
        Python.Write(FilePath, $"a = np.random.default_rng(1).integers(-30000, 30000, (20, 1000)).astype('i2')\nf.create_dataset('x', data=a, chunks=(5, 1000), compression='{filter}')\nf['sum'] = [int(a.sum())]");
        double Sum(IHdf5File file) => file.ReadIntegers("x", 0, 20).Sum(v => (double)v) - file.ReadNumbers("sum")[0];
        using (IHdf5File file = Library()) Assert.Equal(0, Sum(file));
        try
        {
            using IHdf5File file = Hdf5Files.Open(FilePath, new Hdf5Access(Hdf5Reader.Managed));
            Assert.Equal(0, Sum(file));
        }
        catch (DataFaultException e) { Assert.Contains("filters", e.Fault.Found, StringComparison.Ordinal); }
    }

    [SkippableFact]
    public void NumbersBeyond32Bits_AreRefusedByBoth()
    {
        Python.Write(FilePath, "f['u4'] = np.array([[1, 4000000000]], 'u4')\nf['i8'] = np.array([[1, -(1 << 40)]], 'i8')\nf['u8'] = np.array([[1, 1 << 63]], 'u8')");
        foreach (Hdf5Reader reader in Readers)
        {
            using IHdf5File file = Hdf5Files.Open(FilePath, new Hdf5Access(reader));
            foreach (string name in (string[])["u4", "i8", "u8"]) Assert.ThrowsAny<DataFaultException>(() => file.ReadIntegers(name, 0, 1));
        }
    }

    /// <summary>What was never written reads as fill values; a dataset that nothing was written to is no data.</summary>
    [SkippableFact]
    public void NeverWritten_IsRefused()
    {
        Python.Write(FilePath, "f.create_dataset('x', (50, 100), 'i2', chunks=(10, 100))\nf.create_dataset('part', (50, 100), 'i2', chunks=(10, 100))[0:10] = 1");
        using IHdf5File file = Library();
        Assert.Contains("ever written", Assert.ThrowsAny<DataFaultException>(() => file.ReadIntegers("x", 0, 50)).Fault.Found, StringComparison.Ordinal);
        Assert.Equal(1000, file.ReadIntegers("part", 0, 50).Sum());
    }

    [SkippableTheory]
    [InlineData("chunks=(1, 1 << 20), compression='gzip'")]
    [InlineData("")]
    public void HugeDeclaredSize_IsRefusedByBothBeforeMemoryIsAskedFor(string storage)
    {
        Python.Write(FilePath, storage.Length > 0 ? $"d = f.create_dataset('x', (100000, 1 << 20), 'i2', {storage})\nd[0, :10] = 1"
            : "p = h5py.h5p.create(h5py.h5p.DATASET_CREATE)\nh5py.h5d.create(f.id, b'x', h5py.h5t.STD_I16LE, h5py.h5s.create_simple((100000, 1 << 20)), p)");
        foreach (Hdf5Reader reader in Readers)
        {
            long before = GC.GetTotalAllocatedBytes();
            using IHdf5File file = Hdf5Files.Open(FilePath, new Hdf5Access(reader));
            Assert.Contains("declared bytes", Assert.ThrowsAny<DataFaultException>(() => file.Shape("x")).Fault.Found, StringComparison.Ordinal);
            Assert.InRange(GC.GetTotalAllocatedBytes() - before, 0, 100_000_000);
        }
    }

    [SkippableFact]
    public void DeepPathsAndNullSpaces_AreAnsweredByBoth()
    {
        Python.Write(FilePath, "f['/'.join('d%d' % k for k in range(40)) + '/x'] = [1, 2]\nf['/'.join('e%d' % k for k in range(200)) + '/x'] = [1, 2]\nf['none'] = h5py.Empty('f8')");
        foreach (Hdf5Reader reader in Readers)
        {
            using IHdf5File file = Hdf5Files.Open(FilePath, new Hdf5Access(reader));
            Assert.Equal([1.0, 2.0], file.ReadNumbers(string.Join('/', Enumerable.Range(0, 40).Select(k => $"d{k}")) + "/x"));
            Assert.ThrowsAny<DataFaultException>(() => file.ReadNumbers(string.Join('/', Enumerable.Range(0, 200).Select(k => $"e{k}")) + "/x"));
            Assert.ThrowsAny<DataFaultException>(() => file.ReadNumbers("none"));
            Assert.NotEmpty(file.Describe(4000));
        }
    }

    [SkippableFact]
    public void OpenForWriting_IsStillBeingWritten()
    {
        Skip.IfNot(Hdf5Files.HasLibrary, "no HDF5 C library on this machine");
        Python.Write(FilePath, "f['x'] = [1, 2]\nf.flush()\nimport subprocess, shutil\nshutil.copy(path, path + '.live')\nf.close()\nf = h5py.File(path, 'a', libver='latest')\nf['y'] = [1]\nf.swmr_mode = True\nf.flush()\nshutil.copy(path, path + '.live')", options: ", libver='latest'");
        foreach (Hdf5Reader reader in Readers)
            Assert.Contains("open for writing", Assert.ThrowsAny<DataFaultException>(() => Hdf5Files.Open(FilePath + ".live", new Hdf5Access(reader))).Fault.Found, StringComparison.Ordinal);
    }

    static Hdf5Reader[] Readers => Hdf5Files.HasLibrary ? [Hdf5Reader.Library, Hdf5Reader.Managed] : [Hdf5Reader.Managed];

    IHdf5File Library()
    {
        Skip.IfNot(Hdf5Files.HasLibrary, "no HDF5 C library on this machine");
        return Hdf5Files.Open(FilePath, new Hdf5Access(Hdf5Reader.Library));
    }

    Fault Managed() => Assert.ThrowsAny<DataFaultException>(() => Hdf5Files.Open(FilePath, new Hdf5Access(Hdf5Reader.Managed))).Fault;
}
