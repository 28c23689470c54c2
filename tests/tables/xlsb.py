"""Writes workbooks of the xlsb sort, record by record, from the published description of the format ([MS-XLSB]);
no general-purpose library that writes them is at hand. A free office suite opens the result."""

import struct, zipfile
def record(kind, payload=b""):
    head=bytes([kind]) if kind<0x80 else bytes([kind&0x7F|0x80, kind>>7])
    n=len(payload); size=b""
    while True:
        b=n&0x7F; n>>=7
        size+=bytes([b|(0x80 if n else 0)])
        if not n: break
    return head+size+payload
def wide(text):
    return struct.pack("<I",len(text))+text.encode("utf-16-le")
def cellbytes(col): return struct.pack("<II",col,0)
def write(path, sheets):
    ct='<?xml version="1.0" encoding="UTF-8"?><Types xmlns="http://schemas.openxmlformats.org/package/2006/content-types"><Default Extension="bin" ContentType="application/vnd.ms-excel.sheet.binary.macroEnabled.main"/><Default Extension="rels" ContentType="application/vnd.openxmlformats-package.relationships+xml"/>'+''.join(f'<Override PartName="/xl/worksheets/sheet{i+1}.bin" ContentType="application/vnd.ms-excel.worksheet"/>' for i in range(len(sheets)))+'</Types>'
    rel='http://schemas.openxmlformats.org/officeDocument/2006/relationships'
    rels=f'<?xml version="1.0" encoding="UTF-8"?><Relationships xmlns="http://schemas.openxmlformats.org/package/2006/relationships"><Relationship Id="rId1" Type="{rel}/officeDocument" Target="xl/workbook.bin"/></Relationships>'
    wrels='<?xml version="1.0" encoding="UTF-8"?><Relationships xmlns="http://schemas.openxmlformats.org/package/2006/relationships">'+''.join(f'<Relationship Id="rId{i+1}" Type="{rel}/worksheet" Target="worksheets/sheet{i+1}.bin"/>' for i in range(len(sheets)))+'</Relationships>'
    book=record(0x83)+record(0x8F)
    for i,(name,hidden,_) in enumerate(sheets):
        book+=record(0x9C, struct.pack("<II",1 if hidden else 0,i+1)+wide(f"rId{i+1}")+wide(name))
    book+=record(0x90)+record(0x84)
    with zipfile.ZipFile(path,"w",zipfile.ZIP_DEFLATED) as z:
        def put(n,d):
            info=zipfile.ZipInfo(n,(2026,3,2,0,0,0)); info.compress_type=zipfile.ZIP_DEFLATED; z.writestr(info,d)
        put("[Content_Types].xml",ct); put("_rels/.rels",rels); put("xl/workbook.bin",book); put("xl/_rels/workbook.bin.rels",wrels)
        for i,(_,_,rows) in enumerate(sheets):
            nrow=len(rows); ncol=max(map(len,rows))
            s=record(0x81)+record(0x94,struct.pack("<IIII",0,nrow-1,0,ncol-1))+record(0x91)
            for r,row in enumerate(rows):
                s+=record(0x00,struct.pack("<IIHBBBI",r,0,300,0,0,0,1)+struct.pack("<II",0,len(row)-1))
                for c,v in enumerate(row):
                    if v is None: continue
                    if isinstance(v,bool): s+=record(0x04,cellbytes(c)+bytes([v]))
                    elif isinstance(v,(int,float)): s+=record(0x05,cellbytes(c)+struct.pack("<d",v))
                    elif v=="#DIV/0!": s+=record(0x03,cellbytes(c)+bytes([0x07]))
                    else: s+=record(0x06,cellbytes(c)+wide(v))
            s+=record(0x92)+record(0x82)
            put(f"xl/worksheets/sheet{i+1}.bin",s)
